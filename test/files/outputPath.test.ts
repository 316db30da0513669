import { spawnSync } from 'node:child_process';
import { link, mkdir, readdir, readFile, symlink, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { beforeAll, describe, expect, it } from 'vitest';
import { FileError } from '../../main/files/fileError.ts';
import { outputDepth, outputFormatFor } from '../../main/files/outputFormat.ts';
import { assertWritable, defaultOutputPath, refuseOverwritingOriginal } from '../../main/files/outputPath.ts';
import { discardUnfinished, UnfinishedFile } from '../../main/files/unfinishedFile.ts';
import { temporaryFolder } from './temporaryFolder.ts';

const folder = temporaryFolder();

describe('the format by the name', () => {
  it.each([
    ['a.jpg', 'jpeg'],
    ['a.JPEG', 'jpeg'],
    ['a.b.Png', 'png'],
    ['a.tif', 'tiff'],
    ['a.TIFF', 'tiff'],
    ['a.webp', 'webp'],
  ])('%s is %s', (name, format) => expect(outputFormatFor(name)).toBe(format));

  it.each(['a.bmp', 'a', 'a.avif', '.png'])('%s is refused with the list', (name) => {
    expect(() => outputFormatFor(name)).toThrow('.jpg, .jpeg, .png, .tif, .tiff, .webp');
  });

  it('JPEG and WebP take 8 bits', () => {
    expect([
      outputDepth('jpeg', 16),
      outputDepth('webp', 16),
      outputDepth('png', 16),
      outputDepth('tiff', 8),
    ]).toEqual([8, 8, 16, 8]);
  });
});

describe('the original', () => {
  beforeAll(async () => {
    await mkdir(folder.path('photos'));
    await writeFile(folder.path('photos/heron.jpg'), 'photo');
    await symlink(folder.path('photos/heron.jpg'), folder.path('link.jpg'));
    await link(folder.path('photos/heron.jpg'), folder.path('hard.jpg'));
    await symlink(folder.path('photos'), folder.path('other'));
    await writeFile(folder.path('ferry.jpg'), 'another photo');
  });

  it.each(['photos/heron.jpg', 'photos/../photos/heron.jpg', 'link.jpg', 'hard.jpg', 'other/heron.jpg'])(
    'is not overwritten as %s',
    async (out) => {
      const failure = await refuseOverwritingOriginal(
        folder.path('photos/heron.jpg'),
        folder.path(out),
      ).catch((r) => r);
      expect(failure).toBeInstanceOf(FileError);
      expect(failure.message).toContain('Choose another name.');
    },
  );

  it('another file, or none yet, may be written', async () => {
    await refuseOverwritingOriginal(folder.path('photos/heron.jpg'), folder.path('ferry.jpg'));
    await refuseOverwritingOriginal(folder.path('photos/heron.jpg'), folder.path('photos/new.jpg'));
  });
});

describe('the default output', () => {
  it('lies beside the photo and counts on where the name is taken', async () => {
    await mkdir(folder.path('plates'));
    const photo = folder.path('plates/low.water.JPG');
    expect(await defaultOutputPath(photo, 'tiff')).toBe(folder.path('plates/low.water.painted.tif'));
    await writeFile(folder.path('plates/low.water.painted.tif'), '');
    await symlink('nowhere', folder.path('plates/low.water.painted-2.tif'));
    expect(await defaultOutputPath(photo, 'tiff')).toBe(folder.path('plates/low.water.painted-3.tif'));
    expect(await defaultOutputPath(photo, 'jpeg')).toBe(folder.path('plates/low.water.painted.jpg'));
  });
});

describe('whether a place can be written', () => {
  it('a good one is left as it was', async () => {
    await mkdir(folder.path('good'));
    await assertWritable(folder.path('good/out.png'));
    expect(await readdir(folder.path('good'))).toEqual([]);
  });

  it.each([
    ['nowhere/out.png', 'there is no folder'],
    ['file/out.png', 'is not a folder'],
    ['good', 'is a folder'],
    [`${'x'.repeat(300)}.png`, 'the name is too long'],
  ])('%s: %s', async (name, problem) => {
    await writeFile(folder.path('file'), '');
    const failure = await assertWritable(folder.path(name)).catch((reason) => reason);
    expect(failure).toBeInstanceOf(FileError);
    expect(failure.problem).toContain(problem);
  });

  it.skipIf(process.platform !== 'linux')('a system folder that takes no files', async () => {
    const failure = await assertWritable('/proc/out.png').catch((reason) => reason);
    expect(failure).toBeInstanceOf(FileError);
  });

  it('what a killed run left behind is cleared, what a living one writes is not', async () => {
    const inside = folder.path('swept');
    await mkdir(inside);
    const alive = await UnfinishedFile.begin(join(inside, 'a.tif'));
    const [name] = await readdir(inside);
    const dead = spawnSync(process.execPath, ['-e', '']).pid;
    const left = name.replace(`-${process.pid}-`, `-${dead}-`);
    const elsewhere = left.replace(/^\.oxgall-.{8}/, '.oxgall-00000000');
    await writeFile(join(inside, left), '');
    await writeFile(join(inside, elsewhere), '');
    await assertWritable(join(inside, 'b.tif'));
    expect((await readdir(inside)).sort()).toEqual([name, elsewhere].sort());
    alive.discard();
  });
});

describe('an unfinished file', () => {
  it('takes its name only when finished', async () => {
    const inside = folder.path('finish');
    await mkdir(inside);
    const file = await UnfinishedFile.begin(join(inside, 'out'));
    await file.append(Buffer.from('___low water'));
    await file.patch(Buffer.from('at '), 0);
    expect(await readdir(inside)).not.toContain('out');
    await file.finish();
    file.discard();
    expect(await readdir(inside)).toEqual(['out']);
    expect(await readFile(join(inside, 'out'), 'utf8')).toBe('at low water');
  });

  it('is removed at once by discardUnfinished, also while a write is under way', async () => {
    const inside = folder.path('discard');
    await mkdir(inside);
    const files = await Promise.all(['a', 'b'].map((name) => UnfinishedFile.begin(join(inside, name))));
    const writing = files[0].append(new Uint8Array(32 * 2 ** 20));
    writing.catch(() => {}); // Judged below, after the folder was looked at.
    discardUnfinished();
    expect(await readdir(inside)).toEqual([]);
    await expect(writing).rejects.toHaveProperty('name', 'AbortError');
    await expect(files[1].finish()).rejects.toHaveProperty('name', 'AbortError');
    expect(await readdir(inside)).toEqual([]);
  });

  it('keeps a link and writes the file it leads to', async () => {
    const inside = folder.path('linked');
    await mkdir(join(inside, 'far'), { recursive: true });
    await writeFile(join(inside, 'far/real'), 'old');
    await symlink(join(inside, 'far/real'), join(inside, 'out'));
    const file = await UnfinishedFile.begin(join(inside, 'out'));
    await file.append(Buffer.from('new'));
    await file.finish();
    expect(await readFile(join(inside, 'far/real'), 'utf8')).toBe('new');
    expect(await readdir(join(inside, 'far'))).toEqual(['real']);
  });
});
