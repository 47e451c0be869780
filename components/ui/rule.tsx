import { StyleSheet, View } from 'react-native';
import { color } from '../../constants/color.ts';

/** A hairline. Decoration only. */
export function Rule() {
  return <View role="presentation" style={styles.rule} />;
}

const styles = StyleSheet.create({ rule: { height: 1, backgroundColor: color.rule } });
