using System.Globalization;
using Pipeline.Apparatus;
using Pipeline.Backgrounds;
using Pipeline.Response;

namespace Pipeline.Fitting;

/// <summary>Runs that share a beam, fitted with one spectrum: each is a part of one matrix, and common facts of the apparatus move all parts at once.</summary>
/// <remarks>Numbers are those of the first run; the source may have given more or less in the others, by a stated share that enters as one common cause a
/// run, and as a line of the budget.</remarks>
public static class JointFitter
{
    /// <param name="members">Two runs or more.</param>
    /// <param name="background">Background model of all of them.</param>
    /// <param name="settings">Fit.</param>
    /// <param name="yieldMayDiffer">Relative standard deviation of the source's yield between runs.</param>
    /// <returns>One outcome for each run, with the same spectrum.</returns>
    public static IReadOnlyList<SpectrumOutcome> Fit(IReadOnlyList<JointMember> members, IBackgroundModel background, FitSettings settings, double yieldMayDiffer)
    {
        var grid = new VelocityGrid(settings.VelocityFrom, settings.VelocityTo, settings.VelocityStep);
        Func<Reduction.BinnedRun, NetSignal>[] signalOf = [.. members.Select(m => (Func<Reduction.BinnedRun, NetSignal>)(r => ModeSignal.Of(r, m.Condition, background, ResponseModes.Named(m.Mode).Scanned, m.Setup.Detector, settings)))];
        NetSignal[] signals = [.. members.Select((m, k) => signalOf[k](m.Run))];
        FitWindow[] windows = [.. signals.Select(s => new FitWindow(s, settings.FromSeconds, settings.ToSeconds))];
        double[][] yields = YieldCauses(windows, yieldMayDiffer);
        FitWindow window = FitWindow.Stack(windows, yields);
        Replicas[] own = [.. members.Select((m, k) => new Replicas(m.Run, signals[k], signalOf[k], settings))];
        var instrument = new JointInstrument(members, signals, windows, grid);
        EmissionProfile pulse = members[0].Setup.Emission;
        JointPulse? found = pulse is not UnknownEmission unknown || !instrument.NeedsPulse ? null : instrument.TellsPulse ? JointPulse.Find(instrument, window, unknown) : JointPulse.Untold;
        SpectrumOutcome Outcome(int k) => new()
        {
            Signal = signals[k] with { Condition = $"{members[k].Condition}, {members[k].Name}" }, Flight = members[k].Setup.FlightFor(members[k].Condition).Name, Spectra = [],
            Below = new BelowCapture(members[k].Setup.CaptureSpeed, double.NaN, null, found?.Open), YieldScatter = own[k].YieldScatter(windows[k]),
            YieldFreedom = members[k].Run.Groups.Where(g => g.Condition == members[k].Condition && g.Kind == Reduction.ShotKind.Signal).Sum(g => g.BlockShots.Length - 1),
            Remarks = signals[k].Remarks,
        };
        SpectrumOutcome[] outcomes = [.. members.Select((_, k) => Outcome(k))];
        if (found?.Open is { } open) return [.. outcomes.Select(o => o with { NotDeterminedBecause = open })];
        pulse = found?.Pulse ?? pulse;
        var responses = new ShiftedResponses(instrument.With(pulse, [], s => s), Shifts(members, instrument, pulse, found));
        (string, FitWindow, FitWindow)[] moved = [.. yields.Select((y, k) => ($"yield of {members[k + 1].Name}", window.Plus(y), window.Plus([.. y.Select(v => -v)])))];
        Replicas replicas = Replicas.Stack(own, yields);
        string? weak = SpectrumFitter.Weakness(window);
        EstimatorRun[] runs = [.. SpectrumEstimators.For(settings.Shape, settings.ShapePower).Where(e => e is not DirectEstimator).OrderBy(e => e.Name == settings.Estimator ? 0 : 1)
            .Select(e => new EstimatorRun(e, window, responses, replicas, grid, moved))];
        BelowCapture below = BelowCaptureFinder.Find(window, responses.Main, members[0].Setup, settings, outcomes[0].YieldScatter, runs[0]);
        int from = 0;
        for (int k = 0; k < outcomes.Length; from += windows[k++].Count)
        {
            (NetSignal signal, FitWindow part, int start) = (signals[k], windows[k], from);
            outcomes[k] = outcomes[k] with
            {
                Spectra = [.. runs.Select(r => r.ToSpectrum(signal, weak, part, start))], Below = below,
                Others = [.. OtherQuantities.Of(runs[0], runs.FirstOrDefault(r => r.Name == "shape"), members[k].Setup, grid, weak), .. PulseQuantities(found)],
                Remarks = [.. outcomes[k].Remarks, .. members[k].Setup.Remarks, Told(members, yieldMayDiffer)],
            };
        }
        return outcomes;
    }

    static string Told(IReadOnlyList<JointMember> members, double yieldMayDiffer) => string.Create(CultureInfo.InvariantCulture,
        $"one spectrum was fitted to {string.Join(", ", members.Select(m => m.Name))}; numbers are those of {members[0].Name}, and the yield of the others is taken to be the same within {100 * yieldMayDiffer:G3} %");

    static IEnumerable<NamedQuantity> PulseQuantities(JointPulse? found) => found is null ? [] :
    [
        new NamedQuantity("emission delay, fitted", "s", Quantity.Of(found.Pulse.Delay.Value, Math.Sqrt(found.Covariance[0, 0]), [])),
        new NamedQuantity("emission fall, fitted", "s", Quantity.Of(found.Pulse.Tail.Value, Math.Sqrt(found.Covariance[1, 1]), [])),
    ];

    /// <summary>For each run but the first, its net signal times the share by which its yield may differ.</summary>
    static double[][] YieldCauses(FitWindow[] windows, double share)
    {
        int bins = windows.Sum(w => w.Count), from = windows[0].Count;
        var causes = new double[windows.Length - 1][];
        for (int k = 1; k < windows.Length; from += windows[k++].Count)
        {
            FitWindow w = windows[k];
            // of the neighbourhood: a bin's own count would make the cause follow its noise
            double[] net = Numerics.LocalMean.Of([.. w.Total.Zip(w.Background, (t, b) => t - b)], 5);
            causes[k - 1] = FitWindow.Placed([.. net.Select(n => share * n)], from, bins);
        }
        return causes;
    }

    /// <summary>A fact with the same value in several runs is one fact; with another value it is another one, such as a second flight length.</summary>
    static IReadOnlyList<(string, Func<double, ResponseMatrix>)> Shifts(IReadOnlyList<JointMember> members, JointInstrument instrument, EmissionProfile pulse, JointPulse? found)
    {
        var shifts = new List<(string, Func<double, ResponseMatrix>)>();
        var facts = members.SelectMany((m, k) => Nuisances.Of(found is null ? m.Setup : m.Setup with { Emission = pulse }).Select(n => (Fact: n, Value: n.Value(m.Setup with { Emission = pulse }), Member: k)));
        foreach (var fact in facts.GroupBy(f => (f.Fact.Name, f.Value)))
        {
            int[] which = [.. fact.Select(f => f.Member)];
            string name = which.Contains(0) ? fact.Key.Name : $"{fact.Key.Name} of {members[which[0]].Name}";
            Nuisance moved = fact.First().Fact;
            shifts.Add((name, k => instrument.With(pulse, which, s => moved.Shift(s, k))));
        }
        if (found is not null) shifts.AddRange(found.Axes().Select((at, k) => ($"fitted pulse, {(k == 0 ? "better" : "less well")} known part", (Func<double, ResponseMatrix>)(d => instrument.With(at(d), [], s => s)))));
        return shifts;
    }
}
