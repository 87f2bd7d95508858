import { createElement, useState } from 'react';
import { zodResolver } from '@hookform/resolvers/zod';
import { Redirect } from 'expo-router';
import type { Href } from 'expo-router';
import { Controller, useForm } from 'react-hook-form';
import { ScrollView, View } from 'react-native';
import { z } from 'zod';
import { signIn } from '@/server/contract';
import { Button } from '@/client/components/button';
import { Mark } from '@/client/components/mark';
import { Plate } from '@/client/components/plate';
import { useDocumentTitle } from '@/client/components/screen';
import { WarnShape } from '@/client/components/shapes';
import { Text } from '@/client/components/text';
import { TextField } from '@/client/components/text-field';
import { asProblem } from '@/client/data/api-problem';
import { useAppData, useSession } from '@/client/data/app-data-context';
import { safeReturn } from '@/client/screens/sign-in/safe-return';
import { isUnencrypted, signInWords } from '@/client/screens/sign-in/sign-in-words';
import { space } from '@/client/theme/tokens';
import { useColours } from '@/client/theme/use-theme';

// The contract's limits, with words for people.
const form = z.object({
  email: z
    .string()
    .trim()
    .min(1, 'Enter your email address.')
    .includes('@', { error: 'An email address has an @ in it.', abort: true })
    .pipe(signIn.shape.email),
  password: z.string().min(1, 'Enter your password.').pipe(signIn.shape.password),
});
type Form = z.infer<typeof form>;

/** `to`: the place that asked for the sign-in. */
export function SignInScreen({ to }: { to: unknown }) {
  const session = useSession();
  const colours = useColours();
  useDocumentTitle('Sign in');
  if (session.status === 'signed-in') return <Redirect href={safeReturn(to) as Href} />;
  return (
    <ScrollView
      role="main"
      style={{ flex: 1, backgroundColor: colours.ground }}
      contentContainerStyle={{
        flexGrow: 1,
        justifyContent: 'center',
        alignItems: 'center',
        padding: space.l,
      }}
    >
      <Plate style={{ width: '100%', maxWidth: 420, gap: space.l, padding: space.xl }}>
        <View style={{ flexDirection: 'row', alignItems: 'center', gap: space.m }}>
          <Mark size={44} />
          <View style={{ flex: 1 }}>
            <Text heading={1} size="title" weight="medium">
              Turnmark
            </Text>
            <Text size="small" tone="scribeSoft">
              See every tooth pass
            </Text>
          </View>
        </View>
        {session.status === 'signed-out' && session.why === 'ended' ? (
          <Text role="status">Your session has ended. Sign in to go on where you were.</Text>
        ) : null}
        <SignInForm />
        {isUnencrypted(window.location) ? <PlainHttp /> : null}
      </Plate>
    </ScrollView>
  );
}

function SignInForm() {
  const { session } = useAppData();
  const [refused, setRefused] = useState<string | null>(null);
  const { control, handleSubmit, formState } = useForm<Form>({
    resolver: zodResolver(form),
    defaultValues: { email: '', password: '' },
  });
  const submit = handleSubmit(async ({ email, password }) => {
    setRefused(null);
    try {
      await session.signIn(email, password);
    } catch (error) {
      setRefused(signInWords(asProblem(error)));
    }
  });
  return (
    // A form of the page's own, so that password managers find it.
    createElement(
      'form',
      { method: 'post', onSubmit: (event: { preventDefault: () => void }) => event.preventDefault() },
      <View style={{ gap: space.l }}>
        {(['email', 'password'] as const).map((name) => (
          <Controller
            key={name}
            control={control}
            name={name}
            render={({ field, fieldState }) => (
              <TextField
                label={name === 'email' ? 'Email' : 'Password'}
                kind={name}
                value={field.value}
                onChange={field.onChange}
                onBlur={field.onBlur}
                onSubmit={submit}
                error={fieldState.error?.message}
                ref={field.ref}
              />
            )}
          />
        ))}
        {refused ? (
          <Text role="alert" tone="fault">
            {refused}
          </Text>
        ) : null}
        <Button label="Sign in" kind="filled" busy={formState.isSubmitting} onPress={submit} />
      </View>,
    )
  );
}

function PlainHttp() {
  return (
    <View role="note" style={{ flexDirection: 'row', gap: space.s, alignItems: 'flex-start' }}>
      <View style={{ paddingTop: 1 }}>
        <WarnShape />
      </View>
      <Text size="small" tone="scribeSoft" style={{ flex: 1 }}>
        This page is not encrypted: others on the network can read what you type. That is meant for the demo
        only. Give the hub an https address before real people sign in.
      </Text>
    </View>
  );
}
