import { FuseV1Options, FuseVersion } from '@electron/fuses';
import { MakerDeb } from '@electron-forge/maker-deb';
import { MakerZIP } from '@electron-forge/maker-zip';
import { FusesPlugin } from '@electron-forge/plugin-fuses';
import type { ForgeConfig } from '@electron-forge/shared-types';

/** Folder with a runtime archive, for machines without the download host; unset elsewhere, and the packager downloads. */
const zipDir = process.env['ELECTRON_ZIP_DIR'];

const config: ForgeConfig = {
  packagerConfig: {
    asar: true,
    executableName: 'beamdrape',
    ...(zipDir ? { electronZipDir: zipDir } : {}),
    // Everything is bundled into out/: nothing of node_modules goes along.
    prune: false,
    ignore: (file: string) =>
      file !== '' && !/^\/(package\.json|out(\/(main|preload|renderer|cli)(\/.*)?)?)$/.test(file),
  },
  rebuildConfig: { onlyModules: [] },
  outDir: 'dist',
  makers: [
    new MakerZIP({}, ['linux', 'win32', 'darwin']),
    new MakerDeb(
      {
        options: {
          // Honoured but missing in its types; the default takes three minutes.
          ...({ compression: 'gzip' } as object),
          name: 'beamdrape',
          icon: 'assets/icons/beamdrape.png',
          maintainer: 'The Beamdrape founders <founders@beamdrape.invalid>',
          mimeType: ['model/stl'],
        },
      },
      ['linux'],
    ),
  ],
  plugins: [
    new FusesPlugin({
      version: FuseVersion.V1,
      [FuseV1Options.RunAsNode]: false,
      [FuseV1Options.EnableCookieEncryption]: true,
      [FuseV1Options.EnableNodeOptionsEnvironmentVariable]: false,
      [FuseV1Options.EnableNodeCliInspectArguments]: false,
      [FuseV1Options.OnlyLoadAppFromAsar]: true,
      ...(zipDir ? {} : { [FuseV1Options.GrantFileProtocolExtraPrivileges]: false }),
    }),
  ],
};

export default config;
