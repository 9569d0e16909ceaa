namespace GainMargin.Tests.Stability;

/// <summary>What the paths of a family have in common; everything else about them is random.</summary>
internal enum LoopFamily
{
    /// <summary>Nothing.</summary>
    Plain,

    /// <summary>No damping at all.</summary>
    Undamped,

    /// <summary>Damping ratios of 1e-16.</summary>
    DampedByRounding,

    /// <summary>Damping ratios of 1e-8.</summary>
    FaintlyDamped,

    /// <summary>Damping ratios about 3.</summary>
    Overdamped,

    /// <summary>Damping ratios from 1 to 1000 beside light ones.</summary>
    MixedOverdamping,

    /// <summary>Rigid motion that meets neither stiffness nor damping.</summary>
    FreeMotion,

    /// <summary>Rigid motion that meets damping.</summary>
    DriftingMotion,

    /// <summary>Frequencies that are equal.</summary>
    EqualFrequencies,

    /// <summary>Frequencies that differ by 1e-10.</summary>
    CloseFrequencies,

    /// <summary>Frequencies from 1e-3 to 1e6.</summary>
    WideFrequencies,

    /// <summary>Modes with a residue of 1e-14.</summary>
    FaintResidues,

    /// <summary>Undamped modes that the loop does not see or does not push, beside damped ones.</summary>
    HiddenModes,

    /// <summary>Gyroscopic forces.</summary>
    Gyroscopic,

    /// <summary>Circulatory forces, in a modal table those of a held loop.</summary>
    Circulatory,

    /// <summary>A mode that grows by its damping.</summary>
    NegativeDamping,

    /// <summary>A motion that grows by its stiffness, in a modal table that of a held loop.</summary>
    NegativeStiffness,

    /// <summary>Dampers that couple the modes.</summary>
    CoupledDamping,

    /// <summary>A second loop whose gain is held.</summary>
    HeldLoop,
}

/// <summary>
/// Seeded paths of one loop around structures of 2 to 40 degrees of freedom, small ones more often: family after family,
/// from modal tables and from matrices in turn. What has to hold exactly (rigid motion, modes that the loop does not
/// reach) is made of numbers of few bits, so that it holds in memory too.
/// </summary>
internal static class LoopFamilies
{
    private static readonly int Families = Enum.GetValues<LoopFamily>().Length;

    private static readonly double[] DampingLevels = [0, 1e-16, 1e-8, 1e-4, 1e-4, 1e-2, 1e-2, 1e-2, 0.3, 3];

    public static (GainPath Path, string Family) Path(int seed)
    {
        var random = new Random(seed);
        var family = (LoopFamily)(seed % Families);
        var draft = new LoopDraft(random, Order(random), fromModes: seed % 2 == 0);
        Shape(draft, family, random);
        Extend(draft, family, random);
        var path = draft.Path(Ratios(draft, random), Range(random));
        return (path, $"{family} {(seed % 2 == 0 ? "modes" : "matrices")}");
    }

    private static int Order(Random random) => random.Next(10) switch
    {
        < 6 => random.Next(2, 6),
        < 9 => random.Next(6, 15),
        _ => random.Next(15, 41),
    };

    private static void Shape(LoopDraft draft, LoopFamily family, Random random)
    {
        bool exact = family is LoopFamily.FreeMotion or LoopFamily.DriftingMotion or LoopFamily.FaintResidues or LoopFamily.HiddenModes;
        double level = Level(family, random);
        bool chain = family is LoopFamily.Plain or LoopFamily.Undamped or LoopFamily.DampedByRounding or LoopFamily.FaintlyDamped
            or LoopFamily.Overdamped or LoopFamily.FreeMotion or LoopFamily.DriftingMotion or LoopFamily.Gyroscopic
            or LoopFamily.Circulatory or LoopFamily.CoupledDamping or LoopFamily.HeldLoop;
        if (!draft.FromModes && chain && random.Next(3) == 0)
        {
            bool free = family == LoopFamily.FreeMotion;
            draft.MakeChain(level, grounded: !free && family != LoopFamily.DriftingMotion, againstGround: !free);
            return;
        }

        bool wide = family == LoopFamily.WideFrequencies;
        draft.SetFrequencies(wide ? 1e-3 : Power(random, -1, 3), wide ? 1e9 : Power(random, 0.3, 2), ascending: wide);
        if (family is LoopFamily.EqualFrequencies or LoopFamily.CloseFrequencies || (!exact && random.Next(8) == 0))
        {
            draft.Bunch(family == LoopFamily.CloseFrequencies ? 1e-10 : 0);
        }

        bool mixed = family == LoopFamily.MixedOverdamping;
        draft.SetDamping(() => mixed && random.Next(4) > 0 ? Power(random, 0, 3) : level * (0.5 + random.NextDouble()));
        ShapeMode(draft, family, random);
        draft.MakeMatrices(exact, graded: wide);
    }

    private static void ShapeMode(LoopDraft draft, LoopFamily family, Random random)
    {
        switch (family)
        {
            case LoopFamily.FreeMotion:
                draft.MakeRigid(drifting: false);
                break;
            case LoopFamily.DriftingMotion:
                draft.MakeRigid(drifting: true);
                break;
            case LoopFamily.FaintResidues:
                draft.MakeFaint();
                break;
            case LoopFamily.HiddenModes:
                draft.Hide();
                break;
            case LoopFamily.NegativeDamping:
                draft.SetOneDamping(-Power(random, -4, 0));
                break;
            case LoopFamily.NegativeStiffness when !draft.FromModes:
                draft.TurnStiffness();
                break;
            default:
                break;
        }
    }

    private static void Extend(LoopDraft draft, LoopFamily family, Random random)
    {
        bool isRigid = family is LoopFamily.FreeMotion or LoopFamily.DriftingMotion;
        bool isUndamped = family is LoopFamily.Undamped or LoopFamily.HiddenModes or LoopFamily.DampedByRounding;
        if (family == LoopFamily.Gyroscopic || (!isRigid && !draft.FromModes && random.Next(10) == 0))
        {
            draft.AddGyroscopic(Power(random, -3, 1));
        }

        if (family == LoopFamily.CoupledDamping || (!isRigid && !isUndamped && !draft.FromModes && random.Next(10) == 0))
        {
            draft.AddDampers(Power(random, -4, 0.5));
        }

        if (family == LoopFamily.Circulatory && !draft.FromModes)
        {
            draft.AddCirculatory(Power(random, -4, 0));
        }

        if (family == LoopFamily.Circulatory && draft.FromModes)
        {
            draft.Hold(collocated: false, new FeedbackRatios { Position = 1 }, Power(random, -2, 1), atRest: false);
        }
        else if (family == LoopFamily.NegativeStiffness && draft.FromModes)
        {
            draft.Hold(collocated: true, new FeedbackRatios { Position = -1 }, Power(random, 0.1, 1), atRest: true);
        }
        else if (family == LoopFamily.HeldLoop || random.Next(8) == 0)
        {
            var ratios = isUndamped || random.Next(3) == 0 ? new FeedbackRatios { Position = 1 } : new FeedbackRatios { Rate = 1 };
            draft.Hold(collocated: random.Next(4) > 0, ratios, Power(random, -2, 1), atRest: false);
        }
    }

    private static double Level(LoopFamily family, Random random) => family switch
    {
        LoopFamily.Undamped => 0,
        LoopFamily.DampedByRounding => 1e-16,
        LoopFamily.FaintlyDamped => 1e-8,
        LoopFamily.Overdamped => 3,
        LoopFamily.MixedOverdamping => Power(random, -4, -1),
        LoopFamily.HiddenModes or LoopFamily.DriftingMotion => Power(random, -4, 0),
        _ => DampingLevels[random.Next(DampingLevels.Length)],
    };

    /// <summary>Ratios that weigh about the same at one of the frequencies.</summary>
    private static FeedbackRatios Ratios(LoopDraft draft, Random random)
    {
        double rate = draft.TypicalRate();
        double Share() => (random.Next(2) == 0 ? 1 : -1) * Power(random, -1.5, 0.5);
        return random.Next(6) switch
        {
            0 => new FeedbackRatios { Position = 1 },
            1 => new FeedbackRatios { Rate = 1 },
            2 => new FeedbackRatios { Acceleration = 1 },
            3 => new FeedbackRatios { Position = 1, Rate = Share() / rate },
            4 => new FeedbackRatios { Rate = 1, Acceleration = Share() / rate },
            _ => new FeedbackRatios { Position = 1, Rate = Share() / rate, Acceleration = Share() / rate / rate },
        };
    }

    /// <summary>Ends in units of a gain at which something happens.</summary>
    private static (double From, double To) Range(Random random)
    {
        double reach = random.Next(6) == 0 ? Power(random, -3, 0) : Power(random, 0, 3);
        return random.Next(6) switch
        {
            0 or 1 => (0, reach),
            2 => (-reach, 0),
            3 => (-reach, reach * random.NextDouble()),
            4 => (-reach, -reach * Power(random, -4, -1)),
            _ => (reach * Power(random, -4, -1), reach),
        };
    }

    private static double Power(Random random, double least, double most) => Math.Pow(10, least + ((most - least) * random.NextDouble()));
}
