using MathNet.Numerics.Distributions;
using Pipeline.Apparatus;
using Pipeline.Quantities;
using Pipeline.Reduction;

namespace Pipeline.Tests.Reduction;

/// <summary>Analog records made electron by electron: gain of each drawn from a gamma distribution, one pole, electronics noise.</summary>
public class AnalogTests
{
    const double Tick = 5e-6, Tau = 50e-6, Gain = 2e-7, Excess = 1.4, Noise = 2e-3, Start = -2e-3;
    const int Samples = 4000;

    static readonly RecordShape Shape = new() { Shots = 120, Samples = Samples, OriginSeconds = Start, TickSeconds = Tick, Kind = DetectorKind.Analog };

    static double[] Record(Random random, double yield, double offset)
    {
        var volts = new double[Samples];
        // a pulse of 3 ms at 8 ms, over steady light
        double level = 0;
        for (int i = 0; i < Samples; i++)
        {
            double t = Start + i * Tick, rate = 2e4 + yield * 4e5 * Math.Exp(-0.5 * Math.Pow((t - 8e-3) / 3e-3, 2));
            int electrons = Poisson.Sample(random, rate * Tick);
            level *= Math.Exp(-Tick / Tau);
            for (int e = 0; e < electrons; e++) level += Gain / Tau * Gamma.Sample(random, 1 / (Excess - 1), 1 / (Excess - 1)) * Math.Exp(-Tick * random.NextDouble() / Tau);
            volts[i] = level + offset + Normal.Sample(random, 0, Noise);
        }
        return volts;
    }

    static BinnedRun Run(Detector detector, int shots = 120, double fluctuation = 0.3, int repeated = -1)
    {
        var random = new Random(5);
        ShotInfo[] infos = [.. Enumerable.Range(0, shots).Select(k => new ShotInfo(k, ShotKind.Signal, "off", 1, 1, 0))];
        double[][] records = [.. infos.Select(_ => Record(random, Math.Exp(fluctuation * Normal.Sample(random, 0, 1)), 0.01 * Normal.Sample(random, 0, 1)))];
        if (repeated > 0) records[repeated] = records[repeated - 1];
        return Reducer.Reduce(Shape with { Shots = shots }, infos, infos.Select((s, k) => new ShotBlock(k, [s], records[k])), detector, new ReductionSettings());
    }

    static Detector Stated(double gain, double excess) =>
        new() { Kind = DetectorKind.Analog, Efficiency = new(1), VoltSecondPerElectron = new Measured(gain, 0.02 * gain), TimeConstant = new(Tau), ExcessNoise = new(excess) };

    [Fact]
    public void TransferLine_RightGain_IsConfirmedAndSaysHowWell()
    {
        string line = Run(Stated(Gain, Excess)).Remarks.Single(r => r.StartsWith("photon-transfer", StringComparison.Ordinal));
        double[] numbers = Numbers(line);
        Assert.InRange(numbers[0], 1 - 3 * numbers[1], 1 + 3 * numbers[1]);
        Assert.InRange(numbers[1], 0.005, 0.1);
        Assert.DoesNotContain("WARNING", line, StringComparison.Ordinal);
    }

    /// <summary>Gain stated a third too small, and excess noise left out.</summary>
    [Theory]
    [InlineData(Gain / 1.5, Excess, 1.5)]
    [InlineData(Gain, 1.0, 1.4)]
    [InlineData(Gain * 1.5, Excess, 0.667)]
    public void TransferLine_WrongGain_IsWarnedOf(double gain, double excess, double ratio)
    {
        string line = Run(Stated(gain, excess)).Remarks.Single(r => r.StartsWith("photon-transfer", StringComparison.Ordinal));
        double[] numbers = Numbers(line);
        Assert.InRange(numbers[0], ratio - 3 * numbers[1] - 0.01, ratio + 3 * numbers[1] + 0.01);
        Assert.Contains("WARNING", line, StringComparison.Ordinal);
    }

    /// <summary>Over ten sets of shots the slopes scatter as their errors say, and are not biased.</summary>
    [Fact]
    public void TransferLine_ManySets_ScatterAsStated()
    {
        var pulls = new List<double>();
        double truth = Excess * Gain / (2 * Tau);
        var random = new Random(11);
        for (int set = 0; set < 24; set++)
        {
            var line = new TransferLine(Stated(Gain, Excess), Tick);
            for (int k = 0; k < 40; k++)
                line.Add(new ShotInfo(k, ShotKind.Signal, "off", 1, 1, 0), Record(random, Math.Exp(0.3 * Normal.Sample(random, 0, 1)), 0));
            (double slope, double sigma) = line.Fit()!.Value;
            pulls.Add((slope - truth) / sigma);
        }
        Assert.InRange(pulls.Average(), -0.7, 0.7);
        Assert.InRange(Math.Sqrt(pulls.Average(p => p * p)), 0.65, 1.5);
    }

    [Fact]
    public void Reduce_RepeatedBuffer_IsCut() =>
        Assert.Equal([7L], Run(Stated(Gain, Excess), shots: 12, repeated: 7).Cuts.Single(c => c.Reason == "repeated record").Numbers);

    /// <summary>The stated variance of the baselines is the scatter of means before the trigger about the true level.</summary>
    [Fact]
    public void Reduce_Baselines_VaryAsStated()
    {
        const int Shots = 60;
        BinnedRun run = Run(Stated(Gain, Excess), Shots, fluctuation: 0);
        // white noise of 20,000 electrons a second through the pole, and electronics, over 360 samples
        double shot = Excess * Gain * Gain * 2e4 / 1.8e-3, electronics = Noise * Noise / 360;
        Assert.InRange(run.Groups.Single().BaselineVariance / Shots, 0.6 * (shot + electronics), 1.4 * (shot + electronics));
    }

    static double[] Numbers(string line) => [.. line.Split("time constant is ")[1].Split(" of what")[0].Split(" ± ").Select(t => double.Parse(t, System.Globalization.CultureInfo.InvariantCulture))];
}
