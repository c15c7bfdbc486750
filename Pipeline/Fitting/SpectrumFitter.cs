using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Quantities;
using Pipeline.Reduction;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>One condition of a run, from its sums to spectra and numbers with errors.</summary>
public static class SpectrumFitter
{
    /// <summary>Net signal, in its own standard errors, below which mean and spread are not quoted.</summary>
    const double ClearSignal = 5;

    public static SpectrumOutcome Fit(
        BinnedRun run, string condition, Setup setup, IBackgroundModel background, IResponseMode mode, FitSettings settings)
    {
        NetSignal SignalOf(BinnedRun r) => ModeSignal.Of(r, condition, background, mode.Scanned, setup.Detector, settings);
        NetSignal signal = SignalOf(run);
        var window = new FitWindow(signal, settings.FromSeconds, settings.ToSeconds);
        var replicas = new Replicas(run, signal, SignalOf, settings);
        double yieldScatter = replicas.YieldScatter(window);
        int freedom = run.Groups.Where(g => g.Condition == condition && g.Kind == ShotKind.Signal).Sum(g => g.BlockShots.Length - 1);
        FlightMap flight = setup.FlightFor(condition);
        if (flight is AmbiguousFlight && mode.Scanned != Scanned.Detuning) return NotDetermined(signal, flight, setup, yieldScatter, freedom, NotUnique);
        if (setup.Emission is UnknownEmission unknown && mode.Scanned != Scanned.Detuning)
        {
            var cells = new VelocityGrid(settings.VelocityFrom, settings.VelocityTo, settings.VelocityStep);
            return NotDetermined(signal, flight, setup, yieldScatter, freedom, PulseDegeneracy.Describe(window, unknown, pulse => mode.Build(setup with { Emission = pulse }, condition, signal.Axis, cells)));
        }
        var grid = new VelocityGrid(settings.VelocityFrom, settings.VelocityTo, settings.VelocityStep);
        Func<Setup, ResponseMatrix> build = s => mode.Build(s, condition, signal.Axis, grid);
        var responses = new ShiftedResponses(setup, build);
        string? weak = Weakness(window);
        var outcomes = SpectrumEstimators.For(settings.Shape, settings.ShapePower).OrderBy(e => e.Name == settings.Estimator ? 0 : 1)
            .Select(e => new EstimatorRun(e, window, responses, replicas, grid)).ToList();
        // an estimator that has no answer is shown only where it was asked for
        string[] refused = [.. outcomes.Skip(1).Where(o => o.Main.Refusal is not null && mode.Scanned == Scanned.Nothing).Select(o => $"{condition}: no {o.Name} spectrum, {o.Main.Refusal}")];
        outcomes.RemoveAll(o => o.Main.Refusal is not null && o != outcomes[0]);
        return new SpectrumOutcome
        {
            Signal = signal,
            Flight = flight.Name,
            Spectra = [.. outcomes.Select(o => o.ToSpectrum(signal, weak))],
            Others = OtherQuantities.Of(outcomes[0], outcomes.Find(o => o.Name == "shape"), setup, grid, weak),
            Below = BelowCaptureFinder.Find(window, responses.Main, setup, settings, yieldScatter, outcomes[0]),
            YieldScatter = yieldScatter,
            YieldFreedom = freedom,
            Remarks = [.. signal.Remarks, .. setup.Remarks, .. refused, .. UnseenRemarks(condition, window, responses.Main), .. BlockRemarks(run, condition),
                .. mode.Scanned == Scanned.Nothing ? [] : ScanDrift.Remarks(condition, signal.Axis, setup, Scan(window, replicas, setup, build, outcomes[0].Main))],
        };
    }

    static FittedScan? Scan(FitWindow window, Replicas replicas, Setup setup, Func<Setup, ResponseMatrix> build, FittedSpectrum fit)
    {
        if (fit.Refusal is not null) return null;
        ResponseMatrix Moved(double by) => build(setup with { Probe = setup.Probe with { AxisZero = new(setup.Probe.AxisZero.Value + by) } });
        return new FittedScan(window, replicas, by => Moved(by).Fold(fit.Molecules)[window.First..(window.First + window.Count)]);
    }

    const string NotUnique = "arrival time has no unique speed in this condition; folded predictions can be compared, a Doppler scan would tell";

    static SpectrumOutcome NotDetermined(NetSignal signal, FlightMap flight, Setup setup, double yieldScatter, int freedom, string because) => new()
    {
        Signal = signal, Flight = flight.Name, Spectra = [], NotDeterminedBecause = because,
        Below = new BelowCapture(setup.CaptureSpeed, double.NaN, null, because), YieldScatter = yieldScatter, YieldFreedom = freedom,
        Remarks = signal.Remarks,
    };

    internal static string? Weakness(FitWindow window)
    {
        double net = window.Total.Sum() - window.Background.Sum();
        double error = Math.Sqrt(window.Total.Select((t, i) => window.Variance(i, t)).Sum());
        return net >= ClearSignal * error ? null : string.Create(CultureInfo.InvariantCulture,
            $"the net signal is only {net / error:F1} of its standard errors; {ClearSignal} are asked for");
    }

    static IEnumerable<string> UnseenRemarks(string condition, FitWindow window, ResponseMatrix response)
    {
        bool[] blind = new Design(window, response).Blind;
        int slow = Array.FindIndex(blind, b => !b), fast = Array.FindLastIndex(blind, b => !b);
        string before = response.Axis.Points.Count > 0 ? "are outside the scan" : "come after the fit window", after = response.Axis.Points.Count > 0 ? "are outside the scan" : "come before the fit window";
        if (slow > 0)
            yield return string.Create(CultureInfo.InvariantCulture,
                $"{condition}: molecules below {response.Grid.Edge(slow):F1} m/s {before} and are not counted");
        if (fast < blind.Length - 1)
            yield return string.Create(CultureInfo.InvariantCulture,
                $"{condition}: molecules above {response.Grid.Edge(fast + 1):F1} m/s {after} and are not counted");
    }

    static IEnumerable<string> BlockRemarks(BinnedRun run, string condition)
    {
        foreach (ShotGroup group in run.Groups)
            if (group.Condition == condition && group.BlockShots.Length == 1 && group.Point < 0)
                yield return $"{condition}: a single block of {group.Kind} shots; its scatter between shots is not known and not in the errors";
        if (run.Groups.Count(g => g.Condition == condition && g.Point >= 0 && g.BlockShots.Length == 1) is > 0 and var single)
            yield return $"{condition}: {single} points of the scan have a single block of shots; their scatter is not known and not in the errors";
    }
}

/// <summary>The response, and the same for every nuisance that moves it, by plus and minus one standard deviation.</summary>
sealed class ShiftedResponses
{
    public ShiftedResponses(Setup setup, Func<Setup, ResponseMatrix> build)
        : this(build(setup), [.. Nuisances.Of(setup).Select(n => (n.Name, (Func<double, ResponseMatrix>)(k => build(n.Shift(setup, k)))))])
    {
    }

    /// <param name="main">The response.</param>
    /// <param name="shifts">By name, the response where a fact is moved by k standard deviations.</param>
    public ShiftedResponses(ResponseMatrix main, IReadOnlyList<(string Name, Func<double, ResponseMatrix> At)> shifts)
    {
        Main = main;
        var pairs = new (string, ResponseMatrix?, ResponseMatrix?)[shifts.Count];
        Parallel.For(0, pairs.Length, k => pairs[k] = (shifts[k].Name, Try(shifts[k].At, 1), Try(shifts[k].At, -1)));
        Pairs = [.. pairs.Where(p => !(p.Item2?.SameAs(Main) ?? false) || !(p.Item3?.SameAs(Main) ?? false))];

        // a fact that is uncertain by more than itself cannot be moved that far down: the other side then stands for both
        static ResponseMatrix? Try(Func<double, ResponseMatrix> at, double k)
        {
            try { return at(k); }
            catch (ArgumentOutOfRangeException) { return null; }
        }
    }

    public ResponseMatrix Main { get; }
    public IReadOnlyList<(string Name, ResponseMatrix? Up, ResponseMatrix? Down)> Pairs { get; }
}
