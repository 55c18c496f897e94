"""Published resistance methods: from layers or a sounding to stages."""
