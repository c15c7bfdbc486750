using MathNet.Numerics.Distributions;
using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Comparison;
using Pipeline.Fitting;
using Pipeline.Predictions;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Contracts;

/// <summary>What questions must do in laser scans, where one simulated molecule is seen at many points, and the yield of each point is its own.</summary>
public class ScanQuestionTests
{
    const double ShotsEach = 4, BackgroundEach = 5, YieldNoise = 0.06, Number = 2000;
    static readonly VelocityGrid Grid = new(20, 300, 4);
    static readonly FitSettings Fit = new() { FromSeconds = 1e-3, VelocityFrom = 20, VelocityTo = 300, VelocityStep = 4 };
    // 150 m/s at 45 degrees and 600 nm: 177 MHz
    static readonly SignalAxis Axis = new(0, 1e-5, [100, 4000], [.. Enumerable.Range(0, 32).Select(p => 60e6 + 7e6 * p)]);
    static readonly MoleculeList Nature = Simulated(new MathNet.Numerics.Random.Xoshiro256StarStar(3, threadSafe: false), 100_000);
    static readonly Lazy<ComparisonCase[]> Agreeing = new(() => Draws(200, 23, 1, 1));

    public static TheoryData<string> All => ["rate", "velocity", "shape"];

    static Setup Setup
    {
        get
        {
            Setup plain = TestSetups.OneMetre(new InstantEmission { Delay = new(1e-4) }, 20, null);
            return plain with { Probe = plain.Probe with { Angle = new(Math.PI / 4), LaserJitter = new(0.5e6), DetuningSpread = new(0.8e6) } };
        }
    }

    /// <summary>The scatter of the yield is stated, rather than taken from the run.</summary>
    static Setup Stated => Setup with { Detector = Setup.Detector with { AblationMonitorNoise = YieldNoise * Math.Sqrt(ShotsEach) } };

    [Fact]
    public void Concerns_Scan_AsksForVelocityInsteadOfArrivalTime() =>
        Assert.Equal(["rate", "velocity", "shape"], Questions.All.Where(q => q.Concerns(Agreeing.Value[0])).Select(q => q.Name));

    [Theory]
    [MemberData(nameof(All))]
    public void Ask_UnderAgreement_PValuesAreUniform(string question)
    {
        IQuestion q = Questions.All.Single(x => x.Name == question);
        double[] p = [.. Agreeing.Value.Select(c => q.Ask(c).PValue).Order()];
        double distance = p.Select((x, k) => Math.Max((k + 1.0) / p.Length - x, x - (double)k / p.Length)).Max();
        // Kolmogorov: 1.628/sqrt(n) is passed once in a hundred ensembles (NIST/SEMATECH e-Handbook 1.3.5.16)
        Assert.True(distance < 1.628 / Math.Sqrt(p.Length), $"{question}: distance {distance}, median {p[p.Length / 2]}");
    }

    [Theory]
    [InlineData("rate", 0.8, 1)]
    [InlineData("velocity", 1, 1.03)]
    [InlineData("shape", 1, 1.05)]
    public void Ask_WrongModel_IsSeen(string question, double rate, double stretch)
    {
        IQuestion q = Questions.All.Single(x => x.Name == question);
        int seen = Draws(20, 29, rate, stretch).Count(c => q.Ask(c).PValue < 0.01);
        Assert.True(seen >= 18, $"{seen} of 20");
    }

    [Fact]
    public void Ask_FasterMolecules_FindsByHowMuch()
    {
        Answer[] answers = [.. Draws(20, 31, 1, 1.02).Select(c => Questions.All.Single(x => x.Name == "velocity").Ask(c))];
        double error = answers[0].Total / Math.Sqrt(answers.Length);
        Assert.InRange(answers.Average(a => a.Measured), 1.02 - 3.5 * error, 1.02 + 3.5 * error);
    }

    /// <summary>Scans drawn from a beam, against simulations of 3,000 molecules drawn from the same; rate and velocities of the scans may differ.</summary>
    static ComparisonCase[] Draws(int count, int seed, double rate, double stretch)
    {
        var random = new MathNet.Numerics.Random.Xoshiro256StarStar(seed, threadSafe: false);
        double[] molecules = [.. new PredictionFold(Nature, Axis, Grid).Fold(Setup, Stretch.OfVelocities(stretch)).Signal.Select(s => rate * s)];
        return [.. Enumerable.Range(0, count).Select(k => Draw(random, molecules, stated: k % 2 == 0))];
    }

    static ComparisonCase Draw(Random random, double[] molecules, bool stated)
    {
        double[] yields = [.. molecules.Select(_ => Normal.Sample(random, 1, YieldNoise))];
        double[] totals = [.. molecules.Select((m, p) => (double)Poisson.Sample(random, ShotsEach * (m * yields[p] + BackgroundEach)))];
        var signal = new NetSignal
        {
            Axis = Axis, Condition = "off", DetectorKind = DetectorKind.Counting, Shots = ShotsEach * Axis.Bins, Total = totals,
            Live = [.. totals.Select(_ => 1.0 / Axis.Bins)], Background = [.. totals.Select(_ => ShotsEach * BackgroundEach)], BackgroundVariance = new double[Axis.Bins], Causes = [],
        };
        var outcome = new SpectrumOutcome
        {
            Signal = signal, Flight = "free", Spectra = [], Below = new BelowCapture(24, 0, null), YieldFreedom = 10_000,
            YieldScatter = YieldNoise * Math.Sqrt(molecules.Sum(m => m * m)) / molecules.Sum(),
        };
        return new ComparisonCase(outcome, new PredictionFold(Simulated(random, 3000), Axis, Grid), stated ? Stated : Setup, Fit, new ComparisonSettings());
    }

    static MoleculeList Simulated(Random random, int count)
    {
        double[] zeros = new double[count], speeds = new double[count];
        for (int k = 0; k < count; k++)
            do speeds[k] = Normal.Sample(random, 150, 20); while (speeds[k] < 60);
        double[] across = [.. zeros.Select(_ => Normal.Sample(random, 0, 0.4))];
        return new MoleculeList([.. Enumerable.Repeat(1e-4, count)], zeros, speeds, zeros, zeros, across, zeros, [.. Enumerable.Repeat(Number / count, count)], MoleculeWeighting.Crossings);
    }
}
