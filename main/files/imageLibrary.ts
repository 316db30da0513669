import sharp from 'sharp';

// A desktop program opens many photos over hours: nothing decoded is kept behind our back, and on Windows a
// cached file would stay locked.
sharp.cache(false);

export { sharp };
