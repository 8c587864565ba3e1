document.documentElement.classList.add('live');
