import type { Metadata } from 'next';
import { answerCrop } from '../../../../lib/http/answers/land.ts';
import { answerRunParcels } from '../../../../lib/http/answers/run-parcels.ts';
import { callerInView, runInView } from '../../../_components/in-view.ts';
import { orNotFound } from '../../../_components/or-not-found.ts';
import { decoded, type PageProps } from '../../../_components/page-props.ts';
import { CropView } from './crop-view.tsx';

export async function generateMetadata({ params }: PageProps<'code'>): Promise<Metadata> {
  return { title: `Crop ${decoded((await params).code)}` };
}

export default async function CropPage({ params }: PageProps<'code'>) {
  const [caller, run, { code }] = await Promise.all([callerInView(), runInView(), params]);
  const crop = await orNotFound(answerCrop(caller, decoded(code)));
  const grown = run ? await answerRunParcels(caller, run.id, { period: 'season', crop: crop.code, limit: 200 }) : null;
  return <CropView crop={crop} grown={grown} season={run?.season ?? null} units={caller.units} />;
}
