document.title = "Tautline";
