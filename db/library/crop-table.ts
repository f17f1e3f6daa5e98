/**
 * Crop coefficients, heights, stage lengths, rooting, depletion fractions, yield response and salt tolerance as printed, one crop variant a line.
 *
 * Source: Allen, Pereira, Raes & Smith (1998), FAO Irrigation and Drainage Paper 56: Table 11 (stage lengths L, planting date, region),
 * Table 12 (Kc, height), Table 17 (Kcb), Table 22 (maximum rooting depth Zr, depletion fraction p), Table 23 (salt tolerance ECe),
 * Table 24 (seasonal yield response Ky, there from FAO-33). An empty cell is a value the tables do not list; `_lo`/`_hi` are the ends of a printed
 * range. Where the printed stages and their printed total disagree, the stages are kept and the note says so.
 */
export const CROP_TABLE = `crop,group,type,Kc_ini,Kc_mid_lo,Kc_mid_hi,Kc_end_lo,Kc_end_hi,h_max_lo_m,h_max_hi_m,Kcb_ini,Kcb_mid_lo,Kcb_mid_hi,Kcb_end_lo,Kcb_end_hi,L_ini_d,L_dev_d,L_mid_d,L_late_d,plant_date,region,Zr_max_lo_m,Zr_max_hi_m,p,Ky_season_lo,Ky_season_hi,ECe_threshold_lo_dSm,ECe_threshold_hi_dSm,salinity_slope_lo_pct_per_dSm,salinity_slope_hi_pct_per_dSm,notes
broccoli,a small vegetables,annual,0.7,1.05,1.05,0.95,0.95,0.3,0.3,0.15,0.95,0.95,0.85,0.85,35,45,40,15,Sep,California desert,0.4,0.6,0.45,,,2.8,2.8,9.2,9.2,
cabbage,a small vegetables,annual,0.7,1.05,1.05,0.95,0.95,0.4,0.4,0.15,0.95,0.95,0.85,0.85,40,60,50,15,Sep,California desert,0.5,0.8,0.45,0.95,0.95,1.0,1.8,9.8,14.0,
carrot,a small vegetables,annual,0.7,1.05,1.05,0.95,0.95,0.3,0.3,0.15,0.95,0.95,0.85,0.85,30,40,60,20,Feb-Mar,Mediterranean,0.5,1.0,0.35,,,1.0,1.0,14.0,14.0,
celery,a small vegetables,annual,0.7,1.05,1.05,1.0,1.0,0.6,0.6,0.15,0.95,0.95,0.9,0.9,25,40,45,15,Apr,Mediterranean,0.3,0.5,0.2,,,1.8,2.5,6.2,13.0,
lettuce,a small vegetables,annual,0.7,1.0,1.0,0.95,0.95,0.3,0.3,0.15,0.9,0.9,0.9,0.9,20,30,15,10,Apr,Mediterranean,0.3,0.5,0.3,,,1.3,1.7,12.0,12.0,
onion dry,a small vegetables,annual,0.7,1.05,1.05,0.75,0.75,0.4,0.4,0.15,0.95,0.95,0.65,0.65,15,25,70,40,Apr,Mediterranean,0.3,0.6,0.3,1.1,1.1,1.2,1.2,16.0,16.0,
spinach,a small vegetables,annual,0.7,1.0,1.0,0.95,0.95,0.3,0.3,0.15,0.9,0.9,0.85,0.85,20,30,40,10,Nov,arid region,0.3,0.5,0.2,,,2.0,3.2,7.7,16.0,
eggplant,b Solanum vegetables,annual,0.6,1.05,1.05,0.9,0.9,0.8,0.8,0.15,1.0,1.0,0.8,0.8,30,45,40,25,May-Jun,Mediterranean,0.7,1.2,0.45,,,,,,,
sweet pepper (bell),b Solanum vegetables,annual,0.6,1.05,1.05,0.9,0.9,0.7,0.7,0.15,1.0,1.0,0.8,0.8,30,40,110,30,Oct,arid region,0.5,1.0,0.3,1.1,1.1,1.5,1.7,12.0,14.0,
tomato,b Solanum vegetables,annual,0.6,1.15,1.15,0.7,0.9,0.6,0.6,0.15,1.1,1.1,0.6,0.8,30,40,45,30,Apr-May,Mediterranean,0.7,1.5,0.4,1.05,1.05,0.9,2.5,9.0,9.0,"staked to 1.5-2 m: Kc mid 1.20, Kcb mid 1.15"
cantaloupe,c Cucurbit vegetables,annual,0.5,0.85,0.85,0.6,0.6,0.3,0.3,0.15,0.75,0.75,0.5,0.5,30,45,35,10,Jan,California,0.9,1.5,0.45,,,,,,,
cucumber fresh market,c Cucurbit vegetables,annual,0.6,1.0,1.0,0.75,0.75,0.3,0.3,0.15,0.95,0.95,0.7,0.7,20,30,40,15,Jun-Aug,arid region,0.7,1.2,0.5,,,1.1,2.5,7.0,13.0,FAO-56 Example 45 quotes Kc ini 0.4; Table 12 prints 0.6
watermelon,c Cucurbit vegetables,annual,0.4,1.0,1.0,0.75,0.75,0.4,0.4,0.15,0.95,0.95,0.7,0.7,20,30,30,30,Apr,Italy,0.8,1.5,0.4,1.1,1.1,,,,,
potato,d roots and tubers,annual,0.5,1.15,1.15,0.75,0.75,0.6,0.6,0.15,1.1,1.1,0.65,0.65,45,30,70,20,Apr-May,Idaho,0.4,0.6,0.35,1.1,1.1,1.7,1.7,12.0,12.0,Kc end about 0.40 and Kcb end about 0.35 for long-season vine kill
potato (2nd stage set),d roots and tubers,annual,0.5,1.15,1.15,0.75,0.75,0.6,0.6,0.15,1.1,1.1,0.65,0.65,30,35,50,30,Apr,Europe,0.4,0.6,0.35,1.1,1.1,1.7,1.7,12.0,12.0,
sweet potato,d roots and tubers,annual,0.5,1.15,1.15,0.65,0.65,0.4,0.4,0.15,1.1,1.1,0.55,0.55,20,30,60,40,Apr,Mediterranean,1.0,1.5,0.65,,,1.5,2.5,10.0,10.0,
sugar beet,d roots and tubers,annual,0.35,1.2,1.2,0.7,0.7,0.5,0.5,0.15,1.15,1.15,0.5,0.5,50,40,50,40,Apr,Idaho,0.7,1.2,0.55,1.0,1.0,7.0,7.0,5.9,5.9,Kc end up to 1.0 when irrigated in last month
sugar beet (2nd stage set),d roots and tubers,annual,0.35,1.2,1.2,0.7,0.7,0.5,0.5,0.15,1.15,1.15,0.5,0.5,25,35,50,50,May,Mediterranean,0.7,1.2,0.55,1.0,1.0,7.0,7.0,5.9,5.9,
bean green,e legumes,annual,0.5,1.05,1.05,0.9,0.9,0.4,0.4,0.15,1.0,1.0,0.8,0.8,20,30,30,10,Feb-Mar,California; Mediterranean,0.5,0.7,0.45,1.15,1.15,1.0,1.0,19.0,19.0,
bean dry / pulses,e legumes,annual,0.4,1.15,1.15,0.35,0.35,0.4,0.4,0.15,1.1,1.1,0.25,0.25,25,25,30,20,Jun,Idaho,0.6,0.9,0.45,1.15,1.15,1.0,1.0,19.0,19.0,
bean dry (2nd stage set),e legumes,annual,0.4,1.15,1.15,0.35,0.35,0.4,0.4,0.15,1.1,1.1,0.25,0.25,20,30,40,20,May-Jun,continental climates,0.6,0.9,0.45,1.15,1.15,1.0,1.0,19.0,19.0,
chickpea,e legumes,annual,0.4,1.0,1.0,0.35,0.35,0.4,0.4,0.15,0.95,0.95,0.25,0.25,,,,,,,0.6,1.0,0.5,,,,,,,
faba bean dry,e legumes,annual,0.5,1.15,1.15,0.3,0.3,0.8,0.8,0.15,1.1,1.1,0.2,0.2,90,45,40,60,Nov,Europe,0.5,0.7,0.45,,,1.5,1.6,9.6,9.6,
green gram and cowpea,e legumes,annual,0.4,1.05,1.05,0.35,0.6,0.4,0.4,0.15,1.0,1.0,0.25,0.55,20,30,30,20,Mar,Mediterranean,0.6,1.0,0.45,,,4.9,4.9,12.0,12.0,printed total 110 but stages sum to 100; higher Kc end = harvested fresh
groundnut,e legumes,annual,0.4,1.15,1.15,0.6,0.6,0.4,0.4,0.15,1.1,1.1,0.5,0.5,25,35,45,25,dry season,West Africa,0.5,1.0,0.5,0.7,0.7,3.2,3.2,29.0,29.0,
lentil,e legumes,annual,0.4,1.1,1.1,0.3,0.3,0.5,0.5,0.15,1.05,1.05,0.2,0.2,20,30,60,40,Apr,Europe,0.6,0.8,0.5,,,,,,,
pea fresh,e legumes,annual,0.5,1.15,1.15,1.1,1.1,0.5,0.5,0.15,1.1,1.1,1.05,1.05,35,25,30,20,Apr,Idaho,0.6,1.0,0.35,1.15,1.15,1.5,1.5,14.0,14.0,
soybean,e legumes,annual,0.4,1.15,1.15,0.5,0.5,0.5,1.0,0.15,1.1,1.1,0.3,0.3,20,35,60,25,May,central USA,0.6,1.3,0.5,0.85,0.85,5.0,5.0,20.0,20.0,L_dev printed 30/35; 35 reproduces the printed total
artichoke,f perennial vegetables,perennial,0.5,1.0,1.0,0.95,0.95,0.7,0.7,0.15,0.95,0.95,0.9,0.9,40,40,250,30,Apr (1st yr),California,0.6,0.9,0.45,,,,,,,
asparagus,f perennial vegetables,perennial,0.5,0.95,0.95,0.3,0.3,0.2,0.8,0.15,0.9,0.9,0.2,0.2,90,30,200,45,Feb,Mediterranean,1.2,1.8,0.45,,,4.1,4.1,2.0,2.0,Kc stays at Kc ini during spear harvest
strawberry,f perennial vegetables,perennial,0.4,0.85,0.85,0.75,0.75,0.2,0.2,0.3,0.8,0.8,0.7,0.7,,,,,,,0.2,0.3,0.2,,,1.0,1.5,11.0,33.0,
cotton,g fibre,annual,0.35,1.15,1.2,0.5,0.7,1.2,1.5,0.15,1.1,1.15,0.4,0.5,30,50,60,55,Mar-May,Egypt; Pakistan; California,1.0,1.7,0.65,0.85,0.85,7.7,7.7,5.2,5.2,
cotton (2nd stage set),g fibre,annual,0.35,1.15,1.2,0.5,0.7,1.2,1.5,0.15,1.1,1.15,0.4,0.5,30,50,55,45,Apr,Texas,1.0,1.7,0.65,0.85,0.85,7.7,7.7,5.2,5.2,
flax,g fibre,annual,0.35,1.1,1.1,0.25,0.25,1.2,1.2,0.15,1.05,1.05,0.2,0.2,25,35,50,40,Apr,Europe,1.0,1.5,0.5,,,1.7,1.7,12.0,12.0,
rapeseed / canola,h oil crops,annual,0.35,1.0,1.15,0.35,0.35,0.6,0.6,0.15,0.95,1.1,0.25,0.25,,,,,,,1.0,1.5,0.6,,,,,,,"lower mid value = rainfed, less dense"
safflower,h oil crops,annual,0.35,1.0,1.15,0.25,0.25,0.8,0.8,0.15,0.95,1.1,0.2,0.2,20,35,45,25,Apr,California,1.0,2.0,0.6,0.8,0.8,,,,,
sesame,h oil crops,annual,0.35,1.1,1.1,0.25,0.25,1.0,1.0,0.15,1.05,1.05,0.2,0.2,20,30,40,20,Jun,China,1.0,1.5,0.6,,,,,,,printed total 100 but stages sum to 110
sunflower,h oil crops,annual,0.35,1.0,1.15,0.35,0.35,2.0,2.0,0.15,0.95,1.1,0.25,0.25,25,35,45,25,Apr-May,Mediterranean; California,0.8,1.5,0.45,0.95,0.95,,,,,
barley,i cereals,annual,0.3,1.15,1.15,0.25,0.25,1.0,1.0,0.15,1.1,1.1,0.15,0.15,20,25,60,30,Mar-Apr,35-45 deg latitude,1.0,1.5,0.55,,,8.0,8.0,5.0,5.0,
spring wheat,i cereals,annual,0.3,1.15,1.15,0.25,0.4,1.0,1.0,0.15,1.1,1.1,0.15,0.3,20,25,60,30,Mar-Apr,35-45 deg latitude,1.0,1.5,0.55,1.15,1.15,6.0,6.0,7.1,7.1,higher Kc end = hand harvested
"winter wheat, frozen soils",i cereals,annual,0.4,1.15,1.15,0.25,0.4,1.0,1.0,0.15-0.5,1.1,1.1,0.15,0.3,160,75,75,25,Oct,Idaho,1.5,1.8,0.55,1.05,1.05,6.0,6.0,7.1,7.1,
"winter wheat, non-frozen soils",i cereals,annual,0.7,1.15,1.15,0.25,0.4,1.0,1.0,0.15-0.5,1.1,1.1,0.15,0.3,30,140,40,30,Nov,Mediterranean,1.5,1.8,0.55,1.05,1.05,6.0,6.0,7.1,7.1,
maize grain,i cereals,annual,0.3,1.2,1.2,0.35,0.6,2.0,2.0,0.15,1.15,1.15,0.15,0.5,30,40,50,30,Apr,Spain; California,1.0,1.7,0.55,1.25,1.25,1.7,1.7,12.0,12.0,higher Kc end = harvested at high grain moisture; lower = field dry (about 18% wet basis)
maize grain (2nd stage set),i cereals,annual,0.3,1.2,1.2,0.35,0.6,2.0,2.0,0.15,1.15,1.15,0.15,0.5,30,40,50,50,Apr,Idaho,1.0,1.7,0.55,1.25,1.25,1.7,1.7,12.0,12.0,
maize sweet,i cereals,annual,0.3,1.15,1.15,1.05,1.05,1.5,1.5,0.15,1.1,1.1,1.0,1.0,20,25,25,10,May-Jun,Mediterranean,0.8,1.2,0.5,1.25,1.25,1.7,1.7,12.0,12.0,if matured and dried in the field use grain-maize end values; late season about 35 d
millet,i cereals,annual,0.3,1.0,1.0,0.3,0.3,1.5,1.5,0.15,0.95,0.95,0.2,0.2,15,25,40,25,Jun,Pakistan,1.0,2.0,0.55,,,,,,,
sorghum grain,i cereals,annual,0.3,1.0,1.1,0.55,0.55,1.0,2.0,0.15,0.95,1.05,0.35,0.35,20,35,40,30,May-Jun,USA; Pakistan; Mediterranean,1.0,2.0,0.55,0.9,0.9,6.8,6.8,16.0,16.0,printed total 130 but stages sum to 125
rice paddy,i cereals,annual,1.05,1.2,1.2,0.6,0.9,1.0,1.0,1.0,1.15,1.15,0.45,0.7,30,30,60,30,Dec; May,tropics; Mediterranean,0.5,1.0,0.2,,,3.0,3.0,12.0,12.0,p is 0.20 of saturation; Kc ini by climate in FAO-56 Table 14; salinity = soil-water EC under flooding
"alfalfa hay, season-averaged",j forages,forage,0.4,0.95,0.95,0.9,0.9,0.7,0.7,,,,,,,,,,last -4C spring to first -4C autumn,,1.0,2.0,0.55,1.1,1.1,2.0,2.0,7.3,7.3,text of ch. 6 mentions 1.05 for the averaged mid value while Table 12 prints 0.95; no averaged Kcb listed
"alfalfa hay, cutting cycle 1",j forages,forage-cut,0.4,1.2,1.2,1.15,1.15,0.7,0.7,0.3,1.15,1.15,1.1,1.1,10,30,25,10,Apr (last -4C),Idaho,1.0,2.0,0.55,1.1,1.1,2.0,2.0,7.3,7.3,"the three Kc values are: just after cutting, full cover, just before cutting"
"alfalfa hay, later cutting cycles",j forages,forage-cut,0.4,1.2,1.2,1.15,1.15,0.7,0.7,0.3,1.15,1.15,1.1,1.1,5,20,10,10,Jun,Idaho,1.0,2.0,0.55,1.1,1.1,2.0,2.0,7.3,7.3,"the three Kc values are: just after cutting, full cover, just before cutting"
"alfalfa hay, cutting cycle 1 (2nd stage set)",j forages,forage-cut,0.4,1.2,1.2,1.15,1.15,0.7,0.7,0.3,1.15,1.15,1.1,1.1,10,20,20,10,Jan,California,1.0,2.0,0.55,1.1,1.1,2.0,2.0,7.3,7.3,"the three Kc values are: just after cutting, full cover, just before cutting"
"alfalfa hay, later cutting cycles (2nd stage set)",j forages,forage-cut,0.4,1.2,1.2,1.15,1.15,0.7,0.7,0.3,1.15,1.15,1.1,1.1,5,10,10,5,Mar,California,1.0,2.0,0.55,1.1,1.1,2.0,2.0,7.3,7.3,"the three Kc values are: just after cutting, full cover, just before cutting"
alfalfa seed,j forages,forage,0.4,0.5,0.5,0.5,0.5,0.7,0.7,0.3,0.45,0.45,0.45,0.45,,,,,,,1.0,3.0,0.6,1.1,1.1,2.0,2.0,7.3,7.3,
"bermuda hay, averaged",j forages,forage,0.55,1.0,1.0,0.85,0.85,0.35,0.35,0.5,0.95,0.95,0.8,0.8,10,15,75,35,,California desert (several cuttings),1.0,1.5,0.55,,,6.9,6.9,6.4,6.4,
"clover hay (berseem), individual cuts",j forages,forage-cut,0.4,1.15,1.15,1.1,1.1,0.6,0.6,0.3,1.1,1.1,1.05,1.05,,,,,,,0.6,0.9,0.5,,,1.5,1.5,5.7,5.7,"the three Kc values are: just after cutting, full cover, just before cutting"
"ryegrass hay, averaged",j forages,forage,0.95,1.05,1.05,1.0,1.0,0.3,0.3,0.85,1.0,1.0,0.95,0.95,,,,,,,0.6,1.0,0.6,,,5.6,5.6,7.6,7.6,
"sudan grass hay, cutting cycle 1",j forages,forage-cut,0.5,1.15,1.15,1.1,1.1,1.2,1.2,0.3,1.1,1.1,1.05,1.05,25,25,15,10,Apr,California desert,1.0,1.5,0.55,,,2.8,2.8,4.3,4.3,"the three Kc values are: just after cutting, full cover, just before cutting"
"sudan grass hay, later cutting cycles",j forages,forage-cut,0.5,1.15,1.15,1.1,1.1,1.2,1.2,0.3,1.1,1.1,1.05,1.05,3,15,12,7,Jun,California desert,1.0,1.5,0.55,,,2.8,2.8,4.3,4.3,"the three Kc values are: just after cutting, full cover, just before cutting"
"pasture, rotated grazing",j forages,forage,0.4,0.85,1.05,0.85,0.85,0.15,0.3,0.3,0.8,1.0,0.8,0.8,,,,,7 d before last -4C spring to 7 d after first -4C autumn,,0.5,1.5,0.6,,,,,,,
"pasture, extensive grazing",j forages,forage,0.3,0.75,0.75,0.75,0.75,0.1,0.1,0.3,0.7,0.7,0.7,0.7,,,,,,,0.5,1.5,0.6,,,,,,,
"turf, cool season",j forages,perennial,0.9,0.95,0.95,0.95,0.95,0.1,0.1,0.85,0.9,0.9,0.9,0.9,,,,,,,0.5,1.0,0.4,,,,,,,
sugarcane ratoon,k sugar cane,perennial,0.4,1.25,1.25,0.75,0.75,3.0,3.0,0.15,1.2,1.2,0.7,0.7,25,70,135,50,,low latitudes,1.2,2.0,0.65,1.2,1.2,1.7,1.7,5.9,5.9,
sugarcane virgin,k sugar cane,perennial,0.4,1.25,1.25,0.75,0.75,3.0,3.0,0.15,1.2,1.2,0.7,0.7,35,60,190,120,,low latitudes,1.2,2.0,0.65,1.2,1.2,1.7,1.7,5.9,5.9,
banana 1st year,l tropical fruits and trees,perennial,0.5,1.1,1.1,1.0,1.0,3.0,3.0,0.15,1.05,1.05,0.9,0.9,120,90,120,60,Mar,Mediterranean,0.5,0.9,0.35,1.2,1.35,,,,,
banana 2nd year,l tropical fruits and trees,perennial,1.0,1.2,1.2,1.1,1.1,4.0,4.0,0.6,1.1,1.1,1.05,1.05,120,60,180,5,Feb,Mediterranean,0.5,0.9,0.35,1.2,1.35,,,,,
"coffee, bare ground",l tropical fruits and trees,perennial,0.9,0.95,0.95,0.95,0.95,2,3,0.8,0.9,0.9,0.9,0.9,,,,,,,0.9,1.5,0.4,,,,,,,
date palm,l tropical fruits and trees,perennial,0.9,0.95,0.95,0.95,0.95,8.0,8.0,0.8,0.85,0.85,0.85,0.85,,,,,,,1.5,2.5,0.5,,,4.0,4.0,3.6,3.6,
grape table or raisin,m grapes and berries,perennial,0.3,0.85,0.85,0.45,0.45,2.0,2.0,0.15,0.8,0.8,0.4,0.4,20,50,75,60,Mar,California,1.0,2.0,0.35,0.85,0.85,1.5,1.5,9.6,9.6,
grape wine,m grapes and berries,perennial,0.3,0.7,0.7,0.45,0.45,1.5,2.0,0.15,0.65,0.65,0.4,0.4,30,60,40,80,Apr,mid latitudes,1.0,2.0,0.45,0.85,0.85,1.5,1.5,9.6,9.6,
hops,m grapes and berries,perennial,0.3,1.05,1.05,0.85,0.85,5.0,5.0,0.15,1.0,1.0,0.8,0.8,25,40,80,10,Apr,Idaho,1.0,1.2,0.5,,,,,,,
"almond, no ground cover",n fruit trees,orchard,0.4,0.9,0.9,0.65,0.65,5.0,5.0,0.2,0.85,0.85,0.6,0.6,30,50,130,30,Mar,California (deciduous orchard row),1.0,2.0,0.4,,,1.5,1.5,19.0,19.0,Kc end is before leaf drop; after it about 0.20 bare soil
"apple/cherry/pear, no cover, killing frost",n fruit trees,orchard,0.45,0.95,0.95,0.7,0.7,4.0,4.0,0.35,0.9,0.9,0.65,0.65,20,70,90,30,Mar,high latitudes (deciduous orchard row),1.0,2.0,0.5,,,,,,,Kc end is before leaf drop
"apple/cherry/pear, active cover, killing frost",n fruit trees,orchard,0.5,1.2,1.2,0.95,0.95,4.0,4.0,0.45,1.15,1.15,0.9,0.9,20,70,90,30,Mar,high latitudes (deciduous orchard row),1.0,2.0,0.5,,,,,,,
"peach/stone fruit, no cover, killing frost",n fruit trees,orchard,0.45,0.9,0.9,0.65,0.65,3.0,3.0,0.35,0.85,0.85,0.6,0.6,20,70,120,60,Mar,low latitudes (deciduous orchard row),1.0,2.0,0.5,,,1.7,1.7,21.0,21.0,
"peach/stone fruit, active cover, killing frost",n fruit trees,orchard,0.5,1.15,1.15,0.9,0.9,3.0,3.0,0.45,1.1,1.1,0.85,0.85,20,70,120,60,Mar,low latitudes (deciduous orchard row),1.0,2.0,0.5,,,1.7,1.7,21.0,21.0,
"avocado, no cover",n fruit trees,orchard,0.6,0.85,0.85,0.75,0.75,3.0,3.0,0.5,0.8,0.8,0.7,0.7,,,,,,,0.5,1.0,0.7,,,,,,,
"citrus 70% canopy, no cover",n fruit trees,orchard,0.7,0.65,0.65,0.7,0.7,4.0,4.0,0.65,0.6,0.6,0.65,0.65,60,90,120,95,Jan,Mediterranean,1.2,1.5,0.5,1.1,1.3,1.7,1.7,16.0,16.0,salinity row is for orange
"citrus 50% canopy, no cover",n fruit trees,orchard,0.65,0.6,0.6,0.65,0.65,3.0,3.0,0.6,0.55,0.55,0.6,0.6,60,90,120,95,Jan,Mediterranean,1.1,1.5,0.5,1.1,1.3,1.7,1.7,16.0,16.0,
kiwi,n fruit trees,orchard,0.4,1.05,1.05,1.05,1.05,3.0,3.0,0.2,1.0,1.0,1.0,1.0,,,,,,,0.7,1.3,0.35,,,,,,,
"olive, 40-60% cover",n fruit trees,orchard,0.65,0.7,0.7,0.7,0.7,3,5,0.55,0.65,0.65,0.65,0.65,30,90,60,90,Mar,Mediterranean,1.2,1.7,0.65,,,,,,,"monthly Spain 60% cover, Jan-Dec: .50 .50 .65 .60 .55 .50 .45 .45 .55 .60 .65 .50"
"pistachio, no cover",n fruit trees,orchard,0.4,1.1,1.1,0.45,0.45,3,5,0.2,1.05,1.05,0.4,0.4,20,60,30,40,Feb,Mediterranean,1.0,1.5,0.4,,,,,,,
walnut,n fruit trees,orchard,0.5,1.1,1.1,0.65,0.65,4,5,0.4,1.05,1.05,0.6,0.6,20,10,130,30,Apr,Utah,1.7,2.4,0.5,,,,,,,`;
