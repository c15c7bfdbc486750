using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Reduction;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Contracts;

/// <summary>What every background model must do.</summary>
public class BackgroundContractTests
{
    static readonly Detector Counting = new() { Kind = DetectorKind.Counting, Efficiency = new(1e-3), ProbeMonitorNoise = 0.005, AblationMonitorNoise = 0.08 };

    public static TheoryData<string> Models => [.. BackgroundModels.All.Select(m => m.Name)];

    [Theory]
    [MemberData(nameof(Models))]
    public void Subtract_NoiselessBackground_RecoversIt(string model)
    {
        var made = new MadeUpRun();
        NetSignal net = BackgroundModels.Named(model).Subtract(made.Make(), "off", Counting);
        for (int i = 0; i < made.Axis.Bins; i++)
        {
            double truth = 100 * made.Background(ShotKind.Signal, made.Axis.EdgeSeconds(i), made.Axis.EdgeSeconds(i + 1));
            Assert.Equal(truth, net.Background[i], 1e-4 * truth);
        }
    }

    [Theory]
    [MemberData(nameof(Models))]
    public void Subtract_MoreLightInSignalShots_ScalesWithTheMonitor(string model)
    {
        var made = new MadeUpRun();
        BinnedRun run = made.Make();
        ShotGroup signal = run.Find("off", ShotKind.Signal)!;
        // 20 % more probe light in the signal shots, as the monitor saw it
        ShotGroup bright = signal with
        {
            BlockProbeMonitor = [.. signal.BlockProbeMonitor.Select(m => 1.2 * m)],
            BlockSums = [.. signal.BlockSums.Select(b => b.Select((x, i) => x + 10 * 0.2 * 2000 * made.Axis.WidthSeconds(i)).ToArray())],
        };
        NetSignal net = BackgroundModels.Named(model).Subtract(run with { Groups = [bright, .. run.Groups.Where(g => g != signal)] }, "off", Counting);
        int late = made.Axis.Bins - 5;
        double truth = 100 * (100 + 1.2 * 2000) * made.Axis.WidthSeconds(late);
        Assert.Equal(truth, net.Background[late], 1e-3 * truth);
    }

    /// <summary>Each cause of a background scales with its error: the covariance from causes and independent part covers the scatter of
    /// the background over drawn runs.</summary>
    [Theory]
    [MemberData(nameof(Models))]
    public void Subtract_DrawnRuns_ScatterAsStated(string model)
    {
        var random = new MathNet.Numerics.Random.Xoshiro256StarStar(3, threadSafe: false);
        var made = new MadeUpRun();
        var plain = new Detector { Kind = DetectorKind.Counting, Efficiency = new(1e-3) };
        int[] window = [.. Enumerable.Range(0, made.Axis.Bins).Where(i => made.Axis.EdgeSeconds(i) > 3e-3)];
        const int Draws = 150;
        var sums = new double[Draws];
        double stated = 0;
        for (int d = 0; d < Draws; d++)
        {
            NetSignal net = BackgroundModels.Named(model).Subtract(made.Make(20, 4, random), "off", plain);
            sums[d] = window.Sum(i => net.Background[i]);
            stated += (window.Sum(i => net.BackgroundVariance[i]) + net.Causes.Sum(c => Math.Pow(window.Sum(i => c.Vector[i]), 2))) / Draws;
        }
        double mean = sums.Average(), scatter = sums.Sum(s => (s - mean) * (s - mean)) / (Draws - 1);
        // a variance from 150 draws is known to sqrt(2/150) = 12 %: three times that
        Assert.InRange(scatter / stated, 0.64, 1.36);
    }

    [Theory]
    [MemberData(nameof(Models))]
    public void Subtract_NoSignalShots_Refuses(string model)
    {
        BinnedRun run = new MadeUpRun().Make();
        Assert.Throws<DataFaultException>(() =>
            BackgroundModels.Named(model).Subtract(run with { Groups = [.. run.Groups.Where(g => g.Kind != ShotKind.Signal)] }, "off", Counting));
    }

    [Fact]
    public void Steady_Slopes_MatchFiniteDifferences()
    {
        SteadyData data = SteadyData.Of(new MadeUpRun().Make(), "off", Counting);
        double[] x = [90, 1900, 30, Math.Log(2e-4), 8, Math.Log(6)];
        int n = data.Cells.Count, p = SteadyModel.Parameters;
        double[] slopes = new double[n * p], up = new double[n], down = new double[n], at = new double[n];
        SteadyModel.Means(data)(x, at, slopes);
        for (int k = 0; k < p; k++)
        {
            double h = 1e-6 * Math.Max(1, Math.Abs(x[k]));
            SteadyModel.Means(data)([.. x.Select((v, i) => i == k ? v + h : v)], up, []);
            SteadyModel.Means(data)([.. x.Select((v, i) => i == k ? v - h : v)], down, []);
            for (int i = 0; i < n; i++) Assert.Equal((up[i] - down[i]) / (2 * h), slopes[i * p + k], 1e-4 * Math.Abs(slopes[i * p + k]) + 1e-5);
        }
    }

    [Fact]
    public void Steady_DoubleFlash_FindsBoth()
    {
        var made = new MadeUpRun { FlashCounts = 60, FlashTime = 6e-5 };
        BinnedRun run = made.Make(400);
        double Second(int i) => 10 * (Math.Exp(-Math.Max(made.Axis.EdgeSeconds(i), 0) / 1.2e-3) - Math.Exp(-Math.Max(made.Axis.EdgeSeconds(i + 1), 0) / 1.2e-3));
        BinnedRun twice = run with
        {
            Groups = [.. run.Groups.Select(g => g.Kind is ShotKind.NoAblation or ShotKind.Dark ? g
                : g with { BlockSums = [.. g.BlockSums.Select((b, k) => b.Select((x, i) => x + g.BlockShots[k] * Second(i)).ToArray())] })],
        };
        NetSignal net = BackgroundModels.Named("steady").Subtract(twice, "off", Counting);
        int at = Enumerable.Range(0, made.Axis.Bins).First(i => made.Axis.EdgeSeconds(i) > 2e-3);
        double truth = 400 * (made.Background(ShotKind.Signal, made.Axis.EdgeSeconds(at), made.Axis.EdgeSeconds(at + 1)) + Second(at));
        Assert.Equal(truth, net.Background[at], 2e-3 * truth);
    }
}
