using MathNet.Numerics.Distributions;
using Pipeline.Analysis;
using Pipeline.Apparatus;
using Pipeline.Reduction;
using SampleDay;

namespace Pipeline.Tests.Ensembles;

/// <summary>Shots as a multiplier with a resistor and a digitiser of 12 bit record them, instead of a counter.</summary>
static class AnalogTraces
{
    public const double VoltSeconds = 1e-6, TimeConstant = 50e-6, ExcessNoise = 1.4;
    const double Noise = 3e-3, Offset = 10e-3, OffsetWalk = 5e-3, Bit = 2e-3;
    const int Lowest = -2048, Highest = 2047;

    public static BinnedRun Reduce(IReadOnlyList<Shot> shots, RunPlan plan, int seed, Setup setup, AnalysisSettings settings)
    {
        var random = new Random(seed);
        // a sample is the value at the end of its tick, so its own tick begins half a tick later
        var shape = new RecordShape
        {
            Shots = shots.Count, Samples = plan.Samples, OriginSeconds = plan.Start + 0.5 * plan.Step, TickSeconds = plan.Step, Kind = DetectorKind.Analog,
            Scale = Bit, LowestCode = Lowest, HighestCode = Highest,
        };
        ShotInfo[] infos = MadeShots.Infos(shots);
        return Reducer.Reduce(shape, infos, shots.Select((s, k) => new ShotBlock(k, [infos[k]], Codes(s.Counts, plan.Step, random))), setup.Detector, settings.Reduction);
    }

    static int[] Codes(short[] counts, double step, Random random)
    {
        double level = 0, offset = Offset + OffsetWalk * Normal.Sample(random, 0, 1), kept = Math.Exp(-step / TimeConstant), shape = 1 / (ExcessNoise - 1);
        return [.. counts.Select(n =>
        {
            level *= kept;
            for (int e = 0; e < n; e++) level += VoltSeconds / TimeConstant * Gamma.Sample(random, shape, shape) * Math.Exp(-step * random.NextDouble() / TimeConstant);
            return Math.Clamp((int)Math.Round((level + offset + Normal.Sample(random, 0, Noise)) / Bit), Lowest, Highest);
        })];
    }
}
