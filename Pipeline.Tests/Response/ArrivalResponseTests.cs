using MathNet.Numerics.Integration;
using Pipeline.Apparatus;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Response;

public class ArrivalResponseTests
{
    /// <summary>v^3 exp(-((v - 140)/30)^2), normalised by 155958214.341177.</summary>
    static double Flux(double v) => v * v * v * Math.Exp(-Math.Pow((v - 140) / 30, 2)) / 155958214.341177;

    static double[] Molecules(VelocityGrid grid) =>
        [.. Enumerable.Range(0, grid.Cells).Select(c => GaussLegendreRule.Integrate(Flux, grid.Edge(c), grid.Edge(c + 1), 5))];

    /// <remarks>Signals of a beam v^3 exp(-((v - 140)/30)^2), L = 1 m, with emission exp(-t/tau)/tau: molecules a second, molecules a metre
    /// and photons a second (n_max 50, 2e6 photons a second over 2 mm). Source: two independent numerical integrations by this team, twelve
    /// digits. Tolerance: a bin of 4 us averages over
    /// the curvature of the signal (2e-5 at 5 ms), cells of 0.02 m/s hold their molecules evenly (5e-5).</remarks>
    [Theory]
    [InlineData(0, 5, 37.5806075, 0.187903038, 619.478648)]
    [InlineData(0, 7, 378.061425, 2.64642997, 8105.46562)]
    [InlineData(0, 10, 10.8370897, 0.108370897, 298.38357)]
    [InlineData(1, 5, 6.03401588236, 0.029312780396, 97.1422140259)]
    [InlineData(1, 7, 318.486188784, 2.04908501777, 6401.20781614)]
    [InlineData(1, 10, 68.1211052715, 0.538144841345, 1588.53305079)]
    [InlineData(1, 15, 0.641993006578, 0.00581561646088, 16.3176728102)]
    [InlineData(5, 5, 1.35951004733, 0.00658525651561, 21.8345541203)]
    [InlineData(5, 8, 133.839857877, 0.893512878313, 2762.89194411)]
    [InlineData(5, 15, 39.9181941583, 0.281711686702, 856.689783503)]
    public void Fold_ReferenceBeam_GivesReferenceSignal(double tauMs, double timeMs, double flux, double density, double photons)
    {
        EmissionProfile emission = tauMs == 0 ? new InstantEmission() : new ExponentialEmission { Tail = new(tauMs * 1e-3) };
        Check(TestSetups.OneMetre(emission, 1e9, 1), flux);
        Check(TestSetups.OneMetre(emission, 1, null), density);
        Check(TestSetups.OneMetre(emission, 2e6 * 2e-3, 50), photons);

        void Check(Setup setup, double expected)
        {
            const double Tick = 2e-6;
            int centre = (int)Math.Round(timeMs * 1e-3 / Tick);
            var axis = new SignalAxis(0, Tick, [centre - 1, centre + 1]);
            var grid = new VelocityGrid(5, 405, 0.02);
            double rate = new ArrivalResponse().Build(setup, "off", axis, grid).Fold(Molecules(grid))[0] / axis.WidthSeconds(0);
            Assert.InRange(rate / expected, 1 - 1e-4, 1 + 1e-4);
        }
    }

    /// <remarks>Flux-averaged photons of the same beam; source as above. Tolerance: mid-slice value of 1/v in cells of 0.1 m/s.</remarks>
    [Fact]
    public void Sum_ReferenceBeam_GivesMeanPhotons()
    {
        var axis = new SignalAxis(0, 1e-3, [0, 10_000]);
        var grid = new VelocityGrid(5, 305, 0.1);
        ResponseMatrix response = new ArrivalResponse().Build(TestSetups.OneMetre(new InstantEmission(), 4000, 50), "off", axis, grid);
        Assert.Equal(20.9717269817, response.Fold(Molecules(grid))[0], 5);
    }

    /// <remarks>Expected counts of a flux detector, N = 1e4, two background counts a bin; source as above.</remarks>
    [Fact]
    public void Fold_TwentyBins_GivesAsimovCounts()
    {
        double[] expected =
        [
            2.0000002652, 2.00601165, 4.117982382, 70.0349210744, 501.8879990704, 1413.2236822482, 2122.5929679573, 2106.0017642054,
            1593.4535489271, 1012.2107481266, 575.9396867333, 306.7916932742, 157.806244538, 80.2132762906, 41.0822085215, 21.6184389557,
            11.954134237, 7.1256267977, 4.6853747187, 3.4336321762,
        ];
        var axis = new SignalAxis(3e-3, 0.5e-3, [.. Enumerable.Range(0, 21)]);
        var grid = new VelocityGrid(5, 405, 0.05);
        double[] molecules = [.. Molecules(grid).Select(n => 1e4 * n)];
        double[] counts = new ArrivalResponse().Build(TestSetups.OneMetre(new InstantEmission(), 1e9, 1), "off", axis, grid).Fold(molecules);
        // cells hold their molecules evenly: 0.05 m/s where an edge cuts a cell errs by 1e-4 of a bin's counts
        for (int i = 0; i < 20; i++) Assert.InRange(counts[i] + 2 - expected[i], -1e-4 * expected[i], 1e-4 * expected[i]);
    }

    [Theory]
    [MemberData(nameof(EmissionList))]
    public void Build_RecordThatHoldsEverything_ConservesMolecules(EmissionProfile emission)
    {
        var axis = new SignalAxis(-1e-3, 1e-4, [.. Enumerable.Range(0, 5001)]);
        var grid = new VelocityGrid(10, 200, 5);
        Setup setup = TestSetups.OneMetre(emission, 4000, 50);
        ResponseMatrix response = new ArrivalResponse().Build(setup, "off", axis, grid);
        double[] single = new ArrivalResponse().Build(setup, "off", new SignalAxis(-1e-3, 0.5001, [0, 1]), grid).Fold(Ones(grid.Cells));
        for (int c = 0; c < grid.Cells; c++)
        {
            double whole = new DetectionYield(setup).CountsAt(grid.Centre(c));
            // mean of the yield over the cell against its value in the middle: curvature of 1/v over 5 m/s at 12.5 m/s is 1.4 %
            Assert.InRange(response.Sum(c) / whole, 0.999, 1.02);
        }
        Assert.Equal(single[0], response.Fold(Ones(grid.Cells)).Sum(), single[0] * 1e-12);
    }

    public static TheoryData<EmissionProfile> EmissionList =>
    [
        new InstantEmission { Delay = new(1e-4) },
        new GaussianEmission { Delay = new(1e-3), Width = new(1e-4) },
        new ExponentialEmission { Tail = new(5e-3) },
        new ExponentialGaussianEmission { Delay = new(1e-4), Width = new(2e-5), Tail = new(4e-5) },
        new GammaEmission { Delay = new(1e-4), Shape = new(1.7), Scale = new(1e-3) },
        new PulseRecord("pulse.csv", [0, 1e-3, 2e-3, 3e-3, 5e-3], [0, 2, 1, 3, 0]).ToEmission(null) with { Distance = new(5e-3), MeanSpeed = new(140), SpeedSpread = new(20) },
    ];

    /// <summary>Mean arrival = mean emission + flight, which the bins of 1 us see to their rounding: counts of a bin lie evenly in it for so
    /// smooth a signal.</summary>
    [Theory]
    [MemberData(nameof(EmissionList))]
    public void Fold_AnyPulse_ArrivesAtMeanEmissionPlusFlight(EmissionProfile emission)
    {
        var axis = new SignalAxis(-1e-3, 1e-6, [.. Enumerable.Range(0, 200_000)]);
        var grid = new VelocityGrid(100, 100.001, 0.001);
        double[] signal = new ArrivalResponse().Build(TestSetups.OneMetre(emission, 1e9, 1), "off", axis, grid).Fold([1]);
        double mean = signal.Select((s, i) => s * axis.CentreSeconds(i)).Sum() / signal.Sum();
        Assert.Equal(emission.MeanTime + 0.01 - 5e-8, mean, emission is InstantEmission ? 5e-7 : 2e-9);
    }

    [Fact]
    public void Build_AmbiguousFlight_Refuses()
    {
        Setup setup = TestSetups.OneMetre(new InstantEmission(), 1, null) with
        {
            Conditions = new Dictionary<string, FlightKind>(StringComparer.Ordinal) { ["on"] = FlightKind.NotUnique },
        };
        var fault = Assert.Throws<DataFaultException>(() =>
            new ArrivalResponse().Build(setup, "on", new SignalAxis(0, 1e-3, [0, 1]), new VelocityGrid(10, 20, 1)));
        Assert.Contains("not-unique", fault.Fault.Found, StringComparison.Ordinal);
    }

    static double[] Ones(int n) => [.. Enumerable.Repeat(1.0, n)];
}
