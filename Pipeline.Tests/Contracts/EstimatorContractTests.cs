using MathNet.Numerics.Integration;
using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Fitting;
using Pipeline.Reduction;
using Pipeline.Response;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Contracts;

/// <summary>What every spectrum estimator and every mode must do.</summary>
public class EstimatorContractTests
{
    static readonly VelocityGrid Grid = new(20, 300, 4);

    public static TheoryData<string> Estimators => [.. SpectrumEstimators.All.Select(e => e.Name)];

    public static TheoryData<string> Modes => [.. ResponseModes.All.Select(m => m.Name)];

    static Setup Setup => TestSetups.OneMetre(new ExponentialGaussianEmission { Delay = new(1e-4), Width = new(2e-5), Tail = new(5e-5) }, 20, null);

    static double[] Beam(double number)
    {
        static double Flux(double v) => v * v * v * Math.Exp(-Math.Pow((v - 140) / 30, 2));
        double[] cells = [.. Enumerable.Range(0, Grid.Cells).Select(c => GaussLegendreRule.Integrate(Flux, Grid.Edge(c), Grid.Edge(c + 1), 5))];
        return [.. cells.Select(c => number * c / cells.Sum())];
    }

    [Theory]
    [MemberData(nameof(Estimators))]
    public void Fit_NoiselessSignal_RecoversNumberMeanAndSpread(string estimator)
    {
        var made = new MadeUpRun();
        ResponseMatrix response = new ArrivalResponse().Build(Setup, "off", made.Axis, Grid);
        double[] truth = Beam(800);
        BinnedRun run = new MadeUpRun { Molecules = response.Fold(truth) }.Make(200);
        NetSignal signal = BackgroundModels.Named("steady").Subtract(run, "off", Setup.Detector);
        FittedSpectrum fit = SpectrumEstimators.Named(estimator).Fit(new FitWindow(signal, 1.5e-3, null), response);
        SpectrumMoments found = fit.Moments, expected = SpectrumMoments.Of(Grid, truth);
        Assert.Null(fit.Doubt);
        // smoothing and the bound at zero move a spectrum a little even without noise
        Assert.Equal(expected.Number, found.Number, 0.005 * expected.Number);
        Assert.Equal(expected.Mean, found.Mean, 0.3);
        Assert.Equal(expected.Spread, found.Spread, 0.6);
        Assert.Equal(expected.Number, fit.Molecules.Sum(), 0.005 * expected.Number);
    }

    /// <summary>At every point of a scan (and at the laser of the setup where nothing is scanned) the counts of a cell over all times are
    /// those of one molecule there.</summary>
    [Theory]
    [MemberData(nameof(Modes))]
    public void Build_AnyMode_IsNotNegativeAndConservesMolecules(string mode)
    {
        IResponseMode made = ResponseModes.Named(mode);
        double[] points = made.Scanned == Scanned.Nothing ? [] : [-6e6, 0, 9e6];
        var axis = new SignalAxis(0, 1e-4, made.Scanned == Scanned.Detuning ? [0, 2000] : [.. Enumerable.Range(0, 2001)], points);
        ResponseMatrix response = made.Build(Setup, "off", axis, Grid);
        for (int c = 0; c < Grid.Cells; c++)
        {
            Assert.True(response.Column(c).ToArray().All(x => x >= 0));
            double photons = points.DefaultIfEmpty(double.NaN).Sum(p => Counts(double.IsNaN(p) ? Setup : Setup with { Probe = Setup.Probe with { Detuning = new(p) } }, c));
            // the yield is taken in the middle of slices of 1 m/s: (0.5/20)^2/3 at the slowest
            Assert.Equal(photons, response.Sum(c), 3e-4 * photons);
        }
    }

    static double Counts(Setup setup, int cell) => GaussLegendreRule.Integrate(new DetectionYield(setup).CountsAt, Grid.Edge(cell), Grid.Edge(cell + 1), 5) / Grid.Step;

    [Fact]
    public void Fit_TwoBeams_ShapeSaysThatItDoesNotFit()
    {
        var made = new MadeUpRun();
        ResponseMatrix response = new ArrivalResponse().Build(Setup, "off", made.Axis, Grid);
        double[] truth = [.. Beam(800).Select((n, c) => n + (Grid.Centre(c) is > 50 and < 60 ? 60 : 0))];
        BinnedRun run = new MadeUpRun { Molecules = response.Fold(truth) }.Make(400);
        NetSignal signal = BackgroundModels.Named("steady").Subtract(run, "off", Setup.Detector);
        FittedSpectrum fit = SpectrumEstimators.Named("shape").Fit(new FitWindow(signal, 1.5e-3, null), response);
        Assert.Contains("does not describe", fit.Doubt, StringComparison.Ordinal);
    }

    [Fact]
    public void Below_UnbiasedOverDrawnRuns_AndCoversTheTruth()
    {
        var random = new MathNet.Numerics.Random.Xoshiro256StarStar(11, threadSafe: false);
        var made = new MadeUpRun();
        ResponseMatrix response = new ArrivalResponse().Build(Setup, "off", made.Axis, Grid);
        double[] share = Grid.ShareBelow(40);
        foreach (double slow in (double[])[0, 3])
        {
            double[] truth = [.. Beam(800).Select((n, c) => n + slow * share[c] / share.Sum())];
            double below = truth.Zip(share, (n, s) => n * s).Sum();
            const int Draws = 60;
            (int covered, double sum, double squares) = (0, 0, 0);
            for (int d = 0; d < Draws; d++)
            {
                BinnedRun run = new MadeUpRun { Molecules = response.Fold(truth) }.Make(60, 6, random);
                NetSignal signal = BackgroundModels.Named("steady").Subtract(run, "off", Setup.Detector);
                var window = new FitWindow(signal, 1.5e-3, null);
                LinearEstimate e = LinearEstimate.Of(window, response, SpectrumEstimators.Named("unfolded").Fit(window, response), share);
                Pipeline.Quantities.Interval counts = Pipeline.Statistics.SignalInterval.Profile(Math.Max(0, e.Counts), e.Background, e.BackgroundError, 0.9);
                if (below >= e.Unit * counts.Low && below <= e.Unit * counts.High) covered++;
                (sum, squares) = (sum + e.Value, squares + e.Value * e.Value);
            }
            // 90 % of 60 is 54; five or fewer below it happens once in 100 ensembles
            Assert.True(covered >= 48, $"{covered} of {Draws} intervals hold {below}");
            double error = Math.Sqrt((squares / Draws - Math.Pow(sum / Draws, 2)) / Draws);
            Assert.InRange(sum / Draws - below, -4 * error, 4 * error);
        }
    }
}
