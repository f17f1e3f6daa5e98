import type { Metadata } from 'next';
import { answerCrops } from '../../../lib/http/answers/land.ts';
import { callerInView } from '../../_components/in-view.ts';
import { PageHead } from '../../_components/page-head.tsx';
import { CropList } from './crop-list.tsx';

export const metadata: Metadata = { title: 'Crops' };

export default async function CropsPage() {
  const caller = await callerInView();
  return (
    <div className="page">
      <PageHead
        title="Crops"
        lead="The library: basal coefficients on the short (grass) surface in the standard climate (wind 2 m/s, least humidity 45 %), heights, roots and calendars. Open a crop for the source of every value."
      />
      <CropList crops={await answerCrops(caller)} units={caller.units} />
    </div>
  );
}
