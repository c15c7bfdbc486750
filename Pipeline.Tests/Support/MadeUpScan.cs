using Pipeline.Apparatus;
using Pipeline.Reduction;
using Pipeline.Response;

namespace Pipeline.Tests.Support;

/// <summary>Laser scans made from the response of a setup that is taken to be nature: exactly what is expected, or Poisson draws of it.</summary>
sealed class MadeUpScan
{
    static readonly VelocityGrid Fine = new(20, 300, 4);
    readonly MadeUpRun _steady = new() { ScatterRate = 500 };

    /// <summary>Nature.</summary>
    public required Setup Nature { get; init; }
    /// <summary>[points] laser readings, Hz.</summary>
    public required double[] Readings { get; init; }
    /// <summary>[points] -0.5 for the first shots of the run, 0.5 for the last; null: in the middle.</summary>
    public double[]? Order { get; init; }
    /// <summary>[points] probe light, 1 in the mean; null: 1.</summary>
    public double[]? Light { get; init; }
    /// <summary>Shape of the beam: normal with a mean of 140 m/s and a spread of 15 m/s.</summary>
    public Func<double, double> Beam { get; init; } = v => Math.Exp(-0.5 * Math.Pow((v - 140) / 15, 2));
    /// <summary>Molecules a shot.</summary>
    public double Molecules { get; init; } = 800;

    /// <summary>A beam across 45 degrees on one metre of free flight, 606.3 nm and a natural width of 8.3 MHz.</summary>
    public static Setup Angled(params SpectralLine[] lines)
    {
        Setup setup = TestSetups.OneMetre(new ExponentialGaussianEmission { Delay = new(1e-4), Width = new(2e-5), Tail = new(5e-5) }, 20, null);
        return setup with
        {
            Species = setup.Species with { Wavelength = new(606.3e-9), NaturalLinewidth = new(8.3e6), Lines = lines },
            Probe = setup.Probe with { Angle = new(Math.PI / 4) },
        };
    }

    public static double[] Steps(double from, double to, int points) => [.. Enumerable.Range(0, points).Select(k => from + k * (to - from) / (points - 1))];

    /// <param name="shots">Of each point, in two blocks.</param>
    /// <param name="random">Poisson draws; null: expected counts.</param>
    public BinnedRun Make(int shots = 8, Random? random = null)
    {
        SignalAxis time = _steady.Axis;
        double[] cells = [.. Enumerable.Range(0, Fine.Cells).Select(c => Beam(Fine.Centre(c)))];
        var axis = new SignalAxis(time.OriginSeconds, time.TickSeconds, time.Edges, Readings, Light, Order);
        double[] signal = new MapResponse().Build(Nature, "off", axis, Fine).Fold([.. cells.Select(c => Molecules * c / cells.Sum())]);
        BinnedRun steady = _steady.Make(4 * Readings.Length, 4, random);
        return steady with
        {
            Groups = [.. steady.Groups.Where(g => g.Kind != ShotKind.Signal), .. Enumerable.Range(0, Readings.Length).Select(p => Point(p, signal.AsSpan(p * time.TimeBins, time.TimeBins).ToArray(), shots, random))],
        };
    }

    ShotGroup Point(int point, double[] molecules, int shots, Random? random)
    {
        SignalAxis time = _steady.Axis;
        double light = Light?[point] ?? 1, each = 0.5 * shots;
        double Mean(int i)
        {
            double dark = (time.EdgeSeconds(i + 1) - time.EdgeSeconds(i)) * _steady.DarkRate, unlit = _steady.Background(ShotKind.ProbeBlocked, time.EdgeSeconds(i), time.EdgeSeconds(i + 1));
            double scatter = _steady.Background(ShotKind.NoAblation, time.EdgeSeconds(i), time.EdgeSeconds(i + 1)) - dark;
            return each * (unlit + light * scatter + molecules[i]);
        }
        return new ShotGroup
        {
            Condition = "off", Kind = ShotKind.Signal, Point = point, Detuning = Readings[point], Order = Order?[point] ?? 0,
            BlockSums = [.. Enumerable.Range(0, 2).Select(_ => Enumerable.Range(0, time.TimeBins).Select(i => random is null ? Mean(i) : MathNet.Numerics.Distributions.Poisson.Sample(random, Mean(i))).ToArray())],
            BlockShots = [each, each], BlockProbeMonitor = [each * light, each * light], BlockAblationMonitor = [each, each], FullSum = new double[time.Edges[^1]],
        };
    }
}
