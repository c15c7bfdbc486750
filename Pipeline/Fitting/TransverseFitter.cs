using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Numerics;
using Pipeline.Quantities;
using Pipeline.Reduction;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>A laser scan across the beam: where the axis has its zero, and how fast the molecules move along the laser.</summary>
/// <remarks>The lines of the species, their depletion at the mean speed of the beam, laser jitter and a normal spread of transverse speeds are
/// fitted to the summed signal of each point, each in its own light; temperature is m sigma^2 / k. The mean speed comes from the mean arrival time of the same run.</remarks>
public static class TransverseFitter
{
    /// <summary>Name in the configuration.</summary>
    public const string Mode = "transverse";
    const double ClearSignal = 5;

    public static SpectrumOutcome Fit(BinnedRun run, string condition, Setup setup, IBackgroundModel background, FitSettings settings)
    {
        NetSignal signal = ModeSignal.Of(run, condition, background, Scanned.Detuning, setup.Detector, settings);
        var window = new FitWindow(signal, settings.FromSeconds, settings.ToSeconds);
        var replicas = new Replicas(run, signal, r => ModeSignal.Of(r, condition, background, Scanned.Detuning, setup.Detector, settings), settings);
        double speed = MeanSpeed(background.Subtract(run.WithoutPoints(), condition, setup.Detector), setup, settings);
        double net = window.Total.Sum() - window.Background.Sum(), error = Math.Sqrt(window.Total.Select((t, i) => window.Variance(i, t)).Sum());
        var line = new TransverseLine(setup, signal.Axis, speed);
        double[] best = line.Find(window, Starts(window, signal.Axis.Points));
        double[][] drawn = replicas.Map(w => line.Find(w, [best]));
        (string Name, double[] Up, double[] Down)[] shifted = [.. Nuisances.Of(setup).Where(n => n.Name != "frequency zero" && !n.ScalesOnly).Select(n =>
            (n.Name, new TransverseLine(n.Shift(setup, 1), signal.Axis, speed).Find(window, [best]), new TransverseLine(n.Shift(setup, -1), signal.Axis, speed).Find(window, [best])))];
        Quantity Of(Func<double[], double> of) => net < ClearSignal * error ? Quantity.NotDetermined("the net signal is less than five of its standard errors")
            : Quantity.Of(of(best), Math.Sqrt(Replicas.Variance([.. drawn.Select(of)])), [.. shifted.Select(s => new BudgetLine(s.Name, 0.5 * (of(s.Up) - of(s.Down))))]);
        Quantity spread = Of(x => x[TransverseLine.Spread]);
        // a width that noise can hide is bounded from above: the scatter of replicas that pile up at zero is no error of it
        bool hidden = !(spread.Value > 2 * spread.Total) || best[TransverseLine.Spread] < 1e-3;
        string most = string.Create(System.Globalization.CultureInfo.InvariantCulture, $"the lines hide it: at most {Largest(setup, signal.Axis, speed, window, best):G3} m/s with 95 % confidence (profile likelihood, the brightness of the probe within its uncertainty)");
        Quantity Wide(Func<double[], double> of) => hidden && spread.NotDeterminedBecause is null ? Quantity.NotDetermined(most) : Of(of);
        return new SpectrumOutcome
        {
            Signal = signal, Flight = "across the beam", Spectra = [],
            NotDeterminedBecause = "a scan across the beam tells the zero of the frequency axis and the transverse speeds, not the velocity along the beam",
            Below = new BelowCapture(setup.CaptureSpeed, double.NaN, null, "a scan across the beam"), YieldScatter = replicas.YieldScatter(window),
            YieldFreedom = Math.Max(1, run.Scan(condition).Sum(g => g.BlockShots.Length - 1)), 
            Remarks = [.. signal.Remarks, .. ScanDrift.Remarks(condition, signal.Axis, setup, new FittedScan(window, replicas, by => line.PerShot([best[0], best[1] + by, best[2]], window)))],
            Fitted = line.PerShot(best, window),
            Others =
            [
                new(FrequencyZero, "Hz", Of(x => x[TransverseLine.Zero])), new("transverse speed spread", "m/s", Wide(x => x[TransverseLine.Spread])),
                new("transverse temperature", "K", Wide(x => setup.Species.Mass.Value * x[TransverseLine.Spread] * x[TransverseLine.Spread] / Codata.BoltzmannConstant)),
                new("divergence (rms)", "rad", Wide(x => x[TransverseLine.Spread] / speed)),
            ],
        };
    }

    /// <summary>Power broadening hides the same width: the largest limit over brighter and dimmer light.</summary>
    static double Largest(Setup setup, SignalAxis axis, double speed, FitWindow window, double[] best) =>
        Nuisances.Of(setup).Where(n => n.Name is "saturation" or "scattering rate" or "natural linewidth").SelectMany(n => new[] { n.Shift(setup, 1), n.Shift(setup, -1) }).Append(setup)
            .Max(s => new TransverseLine(s, axis, speed).LargestSpread(window, best));

    /// <summary>Name of the quantity that scans of other runs take their zero from.</summary>
    public const string FrequencyZero = "frequency zero";

    static double MeanSpeed(NetSignal signal, Setup setup, FitSettings settings)
    {
        double[] net = signal.NetPerShot();
        (double sum, double weight) = (0, 0);
        for (int i = 0; i < net.Length; i++)
            if (signal.Axis.StartSeconds(i) >= settings.FromSeconds && signal.Axis.EndSeconds(i) <= (settings.ToSeconds ?? double.PositiveInfinity))
                (sum, weight) = (sum + net[i] * signal.Axis.CentreSeconds(i), weight + net[i]);
        double time = sum / weight + setup.Beamline.TriggerOffset.Value - setup.Emission.MeanTime;
        return Math.Clamp(setup.Beamline.SourceToProbe.Value / Math.Max(time, 1e-6), settings.VelocityFrom, settings.VelocityTo);
    }

    /// <summary>Zero at the centroid and at the highest points.</summary>
    static IEnumerable<double[]> Starts(FitWindow window, IReadOnlyList<double> points)
    {
        double[] net = [.. window.Total.Select((t, i) => Math.Max(0, t - window.Background[i]) / window.Exposure[i])];
        double sum = Math.Max(net.Sum(), 1e-12), centroid = net.Select((n, p) => n * points[p]).Sum() / sum;
        yield return [net.Max(), centroid, 1];
        foreach (int p in net.Select((n, p) => (n, p)).OrderByDescending(x => x.n).Take(3).Select(x => x.p)) yield return [net.Max(), points[p], 1];
    }
}

/// <summary>Counts at each point for amplitude, zero and spread of transverse speeds.</summary>
sealed class TransverseLine
{
    public const int Height = 0, Zero = 1, Spread = 2;
    readonly Setup _setup;
    readonly IReadOnlyList<SpectralLine> _lines;
    readonly IReadOnlyList<double> _points;
    readonly double _speed, _along, _peak;
    readonly LightTable _photons;

    public TransverseLine(Setup setup, SignalAxis axis, double speed)
    {
        (_setup, _lines, _points, _speed) = (setup, setup.Lines, [.. axis.Points.Zip(axis.Order, setup.Probe.Steady)], speed);
        _along = Math.Abs(Math.Sin(setup.Probe.Angle.Value)) / setup.Species.Wavelength.Value;
        double Photons(double exposure) => DetectionYield.Photons(exposure / speed, setup.Species.PhotonLimit?.Value);
        // photons of a molecule at rest along the laser, against detuning, without the spread that is fitted
        double span = _points.Max() - _points.Min() + 60 * setup.Species.NaturalLinewidth.Value + 2 * _lines.Max(l => Math.Abs(l.OffsetHz));
        _photons = new LightTable(setup, axis.Light, span, setup.Species.NaturalLinewidth.Value / 50, Photons);
        _peak = Photons(new DetectionYield(setup).ExposureTimesSpeed(0));
    }

    /// <summary>[points] relative to a molecule in the middle of the line; the height is counts a shot there.</summary>
    double At(double[] x, int point)
    {
        double doppler = _speed * Math.Cos(_setup.Probe.Angle.Value) / _setup.Species.Wavelength.Value, jitter = _setup.Probe.LaserJitter.Value, sigma = double.Hypot(jitter, x[Spread] * _along), sum = 0, lines = 0;
        const int Nodes = 31;
        foreach (SpectralLine line in _lines)
        {
            lines += line.Weight;
            double centre = _points[point] - x[Zero] - line.OffsetHz - doppler, mean = 0, weights = 0;
            for (int k = 0; k < Nodes; k++)
            {
                double u = -5 + 10.0 * k / (Nodes - 1), w = Math.Exp(-0.5 * u * u);
                (mean, weights) = (mean + w * _photons.At(point, centre + u * sigma), weights + w);
            }
            sum += line.Weight * mean / weights;
        }
        return x[Height] * sum / lines / _peak;
    }

    /// <summary>The best of all starts; variances of the model, renewed three times.</summary>
    public double[] Find(FitWindow window, IEnumerable<double[]> starts) => Search(window, starts, 0, 100).Best;

    /// <summary>Where chi-square has risen by 2.7055 above its minimum: one-sided 95 %.</summary>
    public double LargestSpread(FitWindow window, double[] best)
    {
        double lowest = Search(window, [best], 0, 100).Squares, low = best[Spread], high = Math.Max(1, 2 * low);
        double Rise(double spread) => Search(window, [[best[Height], best[Zero], spread]], spread, spread * (1 + 1e-9) + 1e-12).Squares - lowest;
        while (high < 90 && Rise(high) < 2.7055) (low, high) = (high, 1.5 * high);
        for (int k = 0; k < 12; k++)
        {
            double middle = 0.5 * (low + high);
            if (Rise(middle) < 2.7055) low = middle;
            else high = middle;
        }
        return high;
    }

    (double[] Best, double Squares) Search(FitWindow window, IEnumerable<double[]> starts, double lowSpread, double highSpread)
    {
        double[] best = [];
        double lowest = double.PositiveInfinity, width = _points.Max() - _points.Min();
        foreach (double[] start in starts)
        {
            double[] x = start;
            double sum = 0;
            for (int round = 0; round < 3; round++)
            {
                double[] sigma = [.. Enumerable.Range(0, window.Count).Select(i => Math.Sqrt(window.Variance(i, Mean(window, x, i))))];
                // scaled so that each parameter is of order one
                double[] scale = [Math.Max(x[Height], 1e-9), 1e6, 1];
                LeastSquaresResult found = LeastSquares.Minimise((p, residuals, jacobian) => Fill(window, sigma, scale, p, residuals, jacobian), window.Count,
                    [x[Height] / scale[0], x[Zero] / scale[1], x[Spread]], [0, (_points.Min() - width) / scale[1], lowSpread], [1e6, (_points.Max() + width) / scale[1], highSpread]);
                (x, sum) = ([found.Parameters[0] * scale[0], found.Parameters[1] * scale[1], found.Parameters[2]], found.SumOfSquares);
            }
            if (sum < lowest) (lowest, best) = (sum, x);
        }
        return (best, lowest);
    }

    double Mean(FitWindow window, double[] x, int i) => window.Exposure[i] * At(x, i) + window.Background[i];

    void Fill(FitWindow window, double[] sigma, double[] scale, ReadOnlySpan<double> p, Span<double> residuals, Span<double> jacobian)
    {
        double[] x = [p[0] * scale[0], p[1] * scale[1], p[2]];
        for (int i = 0; i < window.Count; i++) residuals[i] = (Mean(window, x, i) - window.Total[i]) / sigma[i];
        if (jacobian.IsEmpty) return;
        for (int k = 0; k < 3; k++)
        {
            double step = k == 2 ? 1e-3 : 1e-4;
            double[] up = [.. x], down = [.. x];
            up[k] += step * scale[k];
            down[k] -= step * scale[k];
            for (int i = 0; i < window.Count; i++) jacobian[i * 3 + k] = (Mean(window, up, i) - Mean(window, down, i)) / (2 * step * sigma[i]);
        }
    }

    /// <summary>[points] counts a shot.</summary>
    public double[] PerShot(double[] x, FitWindow window) => [.. Enumerable.Range(0, window.Count).Select(i => At(x, i))];
}
