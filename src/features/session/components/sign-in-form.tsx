import { useMutation } from '@tanstack/react-query';
import { useForm } from 'react-hook-form';
import { zodResolver } from '@hookform/resolvers/zod';
import { z } from 'zod';
import { Button } from '../../../components/ui/button';
import { Fault } from '../../../components/ui/fault';
import { Field } from '../../../components/ui/field';
import { sayReason } from '../../../components/ui/notice';
import { signIn } from '../api/sign-in';

const schema = z.object({
  email: z.string().trim().min(1, 'Your e-mail address is wanted here.'),
  password: z.string().min(1, 'Your password is wanted here.'),
});

interface Props {
  onSignedIn: () => void;
  /** Filled in where a session of this person has just ended. */
  email?: string;
}

/** Address and password; what the server refuses is said below them, and nothing typed is lost. */
export function SignInForm({ onSignedIn, email = '' }: Props) {
  const form = useForm({ resolver: zodResolver(schema), defaultValues: { email, password: '' } });
  const attempt = useMutation({ mutationFn: signIn, onSuccess: onSignedIn });
  const { errors } = form.formState;
  return (
    <form
      noValidate
      className="flex flex-col gap-16"
      onSubmit={(event) => void form.handleSubmit((values) => attempt.mutate(values))(event)}
    >
      <Field
        label="E-mail address"
        type="email"
        autoComplete="username"
        fault={errors.email?.message ?? null}
        {...form.register('email')}
      />
      <Field
        label="Password"
        type="password"
        autoComplete="current-password"
        data-begin={email ? true : undefined}
        fault={errors.password?.message ?? null}
        {...form.register('password')}
      />
      <div role="alert">
        <Fault text={attempt.isError ? sayReason(attempt.error) : null} />
      </div>
      <div>
        <Button kind="main" type="submit" busy={attempt.isPending}>
          {attempt.isPending ? 'Signing in' : 'Sign in'}
        </Button>
      </div>
    </form>
  );
}
