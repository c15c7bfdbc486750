namespace Pipeline.Statistics;
public static class Bootstrap { public static double[] Weights(int units, Random random) { var w = new double[units]; if (units == 1) { w[0]=1; return w; } for (int i=0;i<units-1;i++) w[random.Next(units)] += (double)units/(units-1); return w; } }
