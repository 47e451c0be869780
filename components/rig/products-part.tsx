import { useState } from 'react';
import { useProducts } from '../../hooks/use-sites.ts';
import { Button } from '../ui/button.tsx';
import { EmptyState } from '../ui/empty-state.tsx';
import { Notice } from '../ui/notice.tsx';
import { Sheet } from '../ui/sheet.tsx';
import { Text } from '../ui/text.tsx';
import { ProductForm } from './product-form.tsx';
import { labelWords, strengthWords } from './product-words.ts';
import { RigPart, type RigPartProps } from './rig-part.tsx';

/** The carbon sources of the site: what they are made of and what their label says. */
export function ProductsPart({ system, mayChange }: RigPartProps) {
  const products = useProducts(system.siteId);
  const [isAdding, setAdding] = useState(false);
  return (
    <RigPart title="Products" action={mayChange ? <Button onPress={() => setAdding(true)}>Add a product</Button> : null}>
      <Text soft>
        A carbon source is food for bacteria, not activated carbon. Alcohol-based ones are flammable: keep them closed, away from ignition
        and children.
      </Text>
      {products.isError ? <Notice error={products.error} onRetry={() => void products.refetch()} /> : null}
      {products.data?.length === 0 ? (
        <EmptyState sentence="No product yet. Add the one that you dose: its label sets the ceiling." />
      ) : null}
      {products.data?.map((product) => (
        <div key={product.id} className="item">
          <Text bold>{product.name}</Text>
          <Text>{labelWords(product)}</Text>
          <Text soft>{strengthWords(product)}</Text>
        </div>
      ))}
      <Sheet title="Add a product" open={isAdding} onClose={() => setAdding(false)}>
        <ProductForm siteId={system.siteId} onDone={() => setAdding(false)} />
      </Sheet>
    </RigPart>
  );
}
