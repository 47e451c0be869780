import { useState } from 'react';
import { roles, type Role } from '#shared/domain/role.ts';
import { useInvite } from '../../hooks/use-sites.ts';
import { roleSentences } from '../../lib/codes/role-words.ts';
import { fieldError, isSaidAtFields } from '../../lib/field-errors.ts';
import { Button } from '../ui/button.tsx';
import { Field } from '../ui/field.tsx';
import { Form } from '../ui/form.tsx';
import { LiveRegion } from '../ui/live-region.tsx';
import { Notice } from '../ui/notice.tsx';
import { RadioGroup } from '../ui/radio-group.tsx';
import { Section } from '../ui/section.tsx';

export function InviteForm({ siteId }: { siteId: string }) {
  const invite = useInvite(siteId);
  const [email, setEmail] = useState('');
  const [role, setRole] = useState<Role>('sitter');
  return (
    <Section title="Invite somebody">
      <Form onSubmit={() => invite.mutate({ email, role }, { onSuccess: () => setEmail('') })}>
        {invite.isError && !isSaidAtFields(invite.error) ? <Notice error={invite.error} /> : null}
        <Field label="E-mail" type="email" value={email} onChange={setEmail} error={fieldError(invite.error, 'email')} />
        <RadioGroup<Role>
          legend="Role"
          value={role}
          onChange={setRole}
          options={roles.map((one) => ({ value: one, label: one, hint: roleSentences[one] }))}
        />
        <div>
          <Button submit kind="primary" busy={invite.isPending}>
            Invite
          </Button>
        </div>
        <LiveRegion>{invite.isSuccess ? `Invited ${invite.data.email} as ${invite.data.role}.` : null}</LiveRegion>
      </Form>
    </Section>
  );
}
