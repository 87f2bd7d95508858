import { getDefaultConfig } from 'expo/metro-config.js';

const config = getDefaultConfig(import.meta.dirname);

// Zod takes its messages in fifty languages along for `z.locales`, which nothing here uses; English it sets up itself.
const ofZod = /[\\/]node_modules[\\/]zod[\\/]/;
const allLocales = /[\\/]locales[\\/]index(\.c?js)$/;
config.resolver.resolveRequest = (context, moduleName, platform) => {
  const wanted = ofZod.test(context.originModulePath)
    ? moduleName.replace(allLocales, '/locales/en$1')
    : moduleName;
  return context.resolveRequest(context, wanted, platform);
};

export default config;
