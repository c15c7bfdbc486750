using Pipeline.Apparatus;
using Pipeline.Ingest;
using Pipeline.Quantities;

namespace Pipeline.Configuration;

/// <summary>[emission] of apparatus.toml.</summary>
static class EmissionReader
{
    /// <param name="t">The table.</param>
    /// <param name="file">Path of the file that a key names.</param>
    /// <returns>The pulse, and the share of all molecules in the probed level, if it is stated.</returns>
    public static (EmissionProfile Pulse, Measured? LevelShare) Read(TomlTable t, Func<TomlTable, string, string> file)
    {
        string profile = t.Choice("profile", ["instant", "gaussian", "exponential", "exponential-gaussian", "gamma", "template", "unknown"]);
        Measured delay = t.OptionalQuantity("delay", Dimension.Time) ?? default;
        Measured? share = Share(t);
        EmissionProfile pulse = profile == "template" ? Template(t, delay, file) : Analytic(t, profile, delay);
        t.RefuseUnknown();
        return (pulse, share);
    }

    /// <summary>As stated, or of a thermal rotor.</summary>
    static Measured? Share(TomlTable t)
    {
        Measured? share = t.OptionalQuantity("level_share", Dimension.Fraction), temperature = t.OptionalQuantity("rotational_temperature", Dimension.Temperature);
        if (share is { Value: not (> 0 and <= 1) }) throw t.Refuse("level_share", $"{share}", "a share in (0, 1]");
        if (temperature is not { } kelvin) return share;
        if (share is not null) throw t.Refuse("level_share", "both level_share and rotational_temperature", "one of them", "leave out what the other one follows from");
        double rotation = t.Quantity("rotational_constant", Dimension.Frequency).Value;
        int level = t.Whole("probed_level", 0, 1000);
        double At(double at) => RotationalLevels.Share(level, rotation, at);
        if (!(kelvin.Value > 0) || !(kelvin.Sigma < kelvin.Value)) throw t.Refuse("rotational_temperature", $"{kelvin} K", "a positive temperature that is known to better than itself");
        return t.Build(() => new Measured(At(kelvin.Value), 0.5 * Math.Abs(At(kelvin.Value + kelvin.Sigma) - At(kelvin.Value - kelvin.Sigma))));
    }

    static EmissionProfile Analytic(TomlTable t, string profile, Measured delay)
    {
        Measured width = profile is "gaussian" or "exponential-gaussian" ? t.Quantity("width", Dimension.Time) : default;
        Measured tail = profile is "exponential" or "exponential-gaussian" ? t.Quantity("tail", Dimension.Time) : default;
        Measured shape = profile == "gamma" ? t.Quantity("shape", Dimension.Fraction) : default, scale = profile == "gamma" ? t.Quantity("scale", Dimension.Time) : default;
        Measured longest = profile == "unknown" ? t.Quantity("longest", Dimension.Time) : default;
        return t.Build<EmissionProfile>(() => profile switch
        {
            "unknown" => new UnknownEmission { Delay = delay, Longest = longest },
            "instant" => new InstantEmission { Delay = delay },
            "gaussian" => new GaussianEmission { Delay = delay, Width = width },
            "exponential" => new ExponentialEmission { Delay = delay, Tail = tail },
            "gamma" => new GammaEmission { Delay = delay, Shape = shape, Scale = scale },
            _ => new ExponentialGaussianEmission { Delay = delay, Width = width, Tail = tail },
        });
    }

    static TemplateEmission Template(TomlTable t, Measured delay, Func<TomlTable, string, string> file)
    {
        if (!t.Has("weighting"))
            throw t.Refuse("weighting", "no such key", "weighting = \"density\" (absorption, weak fluorescence) or \"crossings\" (molecules that pass)", "declare what the signal counts");
        TemplateWeighting weighting = t.Choice("weighting", ("crossings", TemplateWeighting.Crossings), ("density", TemplateWeighting.Density));
        Measured distance = t.OptionalQuantity("distance", Dimension.Length) ?? default;
        bool flown = distance.Value != 0;
        Measured speed = flown ? t.Quantity("mean_speed", Dimension.Speed) : new Measured(1), spread = flown ? t.Quantity("speed_spread", Dimension.Speed) : default;
        double? until = t.OptionalQuantity("baseline_until", Dimension.Time)?.Value;
        Measured? stretch = t.OptionalQuantity("stretch", Dimension.Fraction);
        if (until is null && stretch is null)
            throw t.Refuse("stretch", "neither baseline_until nor stretch", "baseline_until = \"0 us\" (its noise tells how uncertain the width is), or stretch = \"1 ± 0.03\"", "state one of them");
        PulseRecord record = EmissionFile.Read(file(t, "file"), LayoutReader.Dialect(t), t.OptionalText("time_column") ?? "time", t.OptionalText("time_unit"), t.OptionalText("signal_column") ?? "signal");
        TemplateEmission measured = record.ToEmission(until);
        return t.Build(() => measured with
        {
            Delay = new Measured(delay.Value, double.Hypot(delay.Sigma, measured.Delay.Sigma)), Weighting = weighting, Distance = distance, MeanSpeed = speed, SpeedSpread = spread,
            Stretch = stretch ?? measured.Stretch,
        });
    }
}
