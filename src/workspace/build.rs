//! From files to a snapshot: trees, meanings, scopes, evaluations, findings. What did not change is taken over from the
//! snapshot before, and an evaluation that came out equal stops the change there.

use std::collections::{BTreeMap, HashMap, HashSet};
use std::sync::{Arc, LazyLock};

use camino::{Utf8Path, Utf8PathBuf};
use rayon::prelude::*;

use super::snapshot::{Checked, FileState, Located, Origin, RootView, Snapshot};
use super::{Configuration, Progress, order};
use crate::advice;
use crate::evaluate::{self, Context, Evaluation};
use crate::finding::{Anchor, Code, Finding, Place};
use crate::library;
use crate::model::*;
use crate::syntax;
use crate::syntax::tree::BlockKind;
use crate::text::{FileId, SourceText};

/// A file as it goes in.
pub(super) struct FileInput {
    pub id: FileId,
    pub path: Utf8PathBuf,
    pub root: Utf8PathBuf,
    pub source: Arc<SourceText>,
    pub origin: Origin,
}

/// What a block's evaluation and findings were worked out from. Where all of it is the same, so are they.
#[derive(Clone, Debug)]
pub(super) struct Inputs {
    block: Arc<Block>,
    /// The definitions that its names mean, in the order of the names; none for unknown ones.
    meanings: Vec<Vec<Definition>>,
    /// The evaluations of the solutions among them.
    stocks: Vec<Arc<Evaluation>>,
    constituents: Arc<Constituents>,
    lab: Option<Arc<Block>>,
    configuration: Arc<Configuration>,
    /// Whether a name is unknown or ambiguous: then any definition may matter.
    is_open: bool,
}

impl Inputs {
    fn same_as(&self, other: &Inputs) -> bool {
        let same_meanings = |one: &Vec<Definition>, other: &Vec<Definition>| {
            one.len() == other.len() && one.iter().zip(other).all(|(one, other)| one.key == other.key && Arc::ptr_eq(&one.block, &other.block))
        };
        !self.is_open
            && Arc::ptr_eq(&self.block, &other.block)
            && Arc::ptr_eq(&self.constituents, &other.constituents)
            && Arc::ptr_eq(&self.configuration, &other.configuration)
            && match (&self.lab, &other.lab) {
                (None, None) => true,
                (Some(one), Some(other)) => Arc::ptr_eq(one, other),
                _ => false,
            }
            && self.meanings.len() == other.meanings.len()
            && self.meanings.iter().zip(&other.meanings).all(|(one, other)| same_meanings(one, other))
            && self.stocks.len() == other.stocks.len()
            && self.stocks.iter().zip(&other.stocks).all(|(one, other)| Arc::ptr_eq(one, other) || same_composition(one, other))
    }
}

/// Whether two evaluations bring the same to whoever takes them.
fn same_composition(one: &Evaluation, other: &Evaluation) -> bool {
    one.members.len() == other.members.len()
        && one.members.iter().zip(&other.members).all(|(one, other)| match (&one.outcome, &other.outcome) {
            (None, None) => true,
            (Some(one), Some(other)) => {
                one.mixture == other.mixture
                    && one.mass_kg == other.mass_kg
                    && one.water_kg == other.water_kg
                    && one.volume_L == other.volume_L
                    && one.made_at_K == other.made_at_K
                    && one.solutes == other.solutes
            }
            _ => false,
        })
}

static LIBRARY_FILES: LazyLock<BTreeMap<FileId, Arc<FileState>>> = LazyLock::new(|| {
    library::built_in()
        .files
        .iter()
        .map(|file| {
            let state = FileState {
                id: file.model.id,
                path: Utf8PathBuf::from(file.name),
                root: Utf8PathBuf::new(),
                origin: Origin::BuiltIn,
                source: file.source.clone(),
                tree: file.tree.clone(),
                model: file.model.clone(),
            };
            (state.id, Arc::new(state))
        })
        .collect()
});

/// Works out a snapshot.
pub(super) fn snapshot(
    inputs: Vec<FileInput>,
    configurations: &BTreeMap<Utf8PathBuf, Arc<Configuration>>,
    last: Option<&Snapshot>,
    progress: &Progress,
) -> Snapshot {
    let files: BTreeMap<FileId, Arc<FileState>> =
        inputs.into_par_iter().map(|input| (input.id, file_state(input, last))).collect();
    let roots = roots(&files, configurations, last);
    let links = links(&files);
    let scopes: HashMap<FileId, Scope> =
        files.par_iter().map(|(id, _)| (*id, scope(*id, &files, &links, last))).collect();
    let mut snapshot = Snapshot {
        files,
        roots,
        scopes,
        checked: HashMap::new(),
        findings: HashMap::new(),
        inputs: HashMap::new(),
        users: HashMap::new(),
        remembered: HashMap::new(),
        library_files: LIBRARY_FILES.clone(),
    };
    evaluate_all(&mut snapshot, last, progress);
    snapshot.remembered = super::remember::remember(&snapshot, last);
    let findings: HashMap<FileId, Arc<Vec<Located>>> = snapshot
        .files
        .par_iter()
        .map(|(id, file)| (*id, Arc::new(file_findings(file, &snapshot, &links))))
        .collect();
    snapshot.findings = findings;
    snapshot
}

fn file_state(input: FileInput, last: Option<&Snapshot>) -> Arc<FileState> {
    let old = last.and_then(|last| last.files.get(&input.id));
    if let Some(old) = old
        && Arc::ptr_eq(&old.source, &input.source)
        && old.root == input.root
        && old.origin == input.origin
    {
        return old.clone();
    }
    let tree = match old {
        Some(old) => syntax::parse_reusing(input.source.as_str(), &old.tree),
        None => syntax::parse(input.source.as_str()),
    };
    let model = lower_file(input.id, &tree, old.map(|old| old.model.as_ref()));
    Arc::new(FileState {
        id: input.id,
        path: input.path,
        root: input.root,
        origin: input.origin,
        source: input.source,
        tree: Arc::new(tree),
        model: Arc::new(model),
    })
}

/// The chemistry of each root: the built-in ions, and those of its files wherever they stand.
fn roots(
    files: &BTreeMap<FileId, Arc<FileState>>,
    configurations: &BTreeMap<Utf8PathBuf, Arc<Configuration>>,
    last: Option<&Snapshot>,
) -> BTreeMap<Utf8PathBuf, Arc<RootView>> {
    let mut roots = BTreeMap::new();
    for (path, configuration) in configurations {
        let of_root = || files.values().filter(|file| file.root == *path);
        let own = |blocks: &FileState| -> Vec<Arc<Block>> {
            blocks.model.blocks.iter().filter(|block| adds_to_chemistry(block)).cloned().collect()
        };
        let blocks: Vec<Arc<Block>> = of_root().flat_map(|file| own(file)).collect();
        let old = last.and_then(|last| last.roots.get(path));
        let constituents = if blocks.is_empty() {
            library::built_in().constituents.clone()
        } else if let Some((old, last)) = old.zip(last)
            && same_blocks(
                &blocks,
                &last.files.values().filter(|file| file.root == *path).flat_map(|file| own(file)).collect::<Vec<_>>(),
            )
        {
            old.constituents.clone()
        } else {
            let built_in = library::built_in().files.iter().flat_map(|file| library::definitions(&file.model));
            let own = of_root().flat_map(|file| library::definitions(&file.model));
            Arc::new(Constituents::build(built_in.chain(own)))
        };
        let view = RootView { path: path.clone(), configuration: configuration.clone(), constituents };
        roots.insert(path.clone(), Arc::new(view));
    }
    roots
}

fn adds_to_chemistry(block: &Block) -> bool {
    match &block.body {
        Body::Ion(_) | Body::Solid(_) => true,
        Body::Substance(substance) => {
            substance.log_kh.is_some() || !substance.inert && substance.gives.is_empty() && substance.molar_mass.is_some()
        }
        _ => false,
    }
}

fn same_blocks(one: &[Arc<Block>], other: &[Arc<Block>]) -> bool {
    one.len() == other.len() && one.iter().zip(other).all(|(one, other)| Arc::ptr_eq(one, other))
}

/// What a `use` line leads to.
pub(super) enum Link {
    /// A file of the same root.
    To(FileId),
    /// No file is there.
    Missing,
    /// The path leads out of the root, or is not written as paths are.
    Refused(String),
    /// A file is there whose name differs in letter case; the name as on disk.
    OtherCase(FileId, String),
}

/// For each file, what its `use` lines lead to.
fn links(files: &BTreeMap<FileId, Arc<FileState>>) -> HashMap<FileId, Vec<Link>> {
    let by_path: HashMap<&Utf8Path, FileId> = files.values().map(|file| (file.path.as_path(), file.id)).collect();
    let by_folded: HashMap<String, FileId> =
        files.values().map(|file| (file.path.as_str().to_lowercase(), file.id)).collect();
    files
        .values()
        .map(|file| {
            let links = file.model.uses.iter().map(|line| link(file, line, &by_path, &by_folded, files)).collect();
            (file.id, links)
        })
        .collect()
}

fn link(
    file: &FileState,
    line: &UseLine,
    by_path: &HashMap<&Utf8Path, FileId>,
    by_folded: &HashMap<String, FileId>,
    files: &BTreeMap<FileId, Arc<FileState>>,
) -> Link {
    let written = line.path.as_str();
    if written.contains('\\') {
        return Link::Refused("Write paths with forward slashes.".into());
    }
    if written.starts_with('/') || written.get(1..2) == Some(":") {
        return Link::Refused("Write the path from this file, not from the top of the disk.".into());
    }
    let folder = file.path.parent().unwrap_or(Utf8Path::new(""));
    let Some(path) = resolved(folder, written).filter(|path| path.starts_with(&file.root)) else {
        return Link::Refused("Keep what the library uses inside its root folder.".into());
    };
    if let Some(id) = by_path.get(path.as_path()) {
        return Link::To(*id);
    }
    match by_folded.get(&path.as_str().to_lowercase()) {
        Some(id) => {
            let name = files.get(id).and_then(|found| found.path.file_name()).unwrap_or_default().to_string();
            Link::OtherCase(*id, name)
        }
        None => Link::Missing,
    }
}

/// The files that the `use` lines of a file lead to, whether they are there or not; refused paths left out.
pub(super) fn used_paths(file: &FileState) -> impl Iterator<Item = Utf8PathBuf> {
    let folder = file.path.parent().unwrap_or(Utf8Path::new(""));
    let relative = file.model.uses.iter().map(|line| line.path.as_str());
    let written = relative.filter(|path| !path.contains('\\') && !path.starts_with('/') && path.get(1..2) != Some(":"));
    written.filter_map(move |path| resolved(folder, path)).filter(|path| path.starts_with(&file.root))
}

/// A relative path put onto a folder, without looking at the disk; none where it climbs above the top.
fn resolved(folder: &Utf8Path, relative: &str) -> Option<Utf8PathBuf> {
    let mut path = folder.to_owned();
    for part in relative.split('/') {
        match part {
            "" | "." => {}
            ".." => {
                if !path.pop() {
                    return None;
                }
            }
            name => path.push(name),
        }
    }
    Some(path)
}

fn scope(
    id: FileId,
    files: &BTreeMap<FileId, Arc<FileState>>,
    links: &HashMap<FileId, Vec<Link>>,
    last: Option<&Snapshot>,
) -> Scope {
    let built_in = library::built_in().names.clone();
    let mut seen = HashSet::from([id]);
    let mut sources = vec![id];
    for link in links.get(&id).into_iter().flatten() {
        if let Link::To(used) | Link::OtherCase(used, _) = link
            && seen.insert(*used)
        {
            sources.push(*used);
        }
    }
    // A scope is made of whole files; where none of them changed it is the one before.
    if let Some(last) = last
        && let Some(old) = last.scopes.get(&id)
        && old.own.sources() == sources.as_slice()
        && sources.iter().all(|source| match (files.get(source), last.files.get(source)) {
            (Some(new), Some(old)) => same_blocks(&new.model.blocks, &old.model.blocks),
            _ => false,
        })
    {
        return old.clone();
    }
    let mut names = Names::default();
    for source in &sources {
        if let Some(file) = files.get(source) {
            names.add_file(*source, &file.model.blocks);
        }
    }
    Scope { own: Arc::new(names), built_in }
}

/// The lab that a recipe is made in: the one that it names, or that the recipe names which it is `like`; else the one that
/// the configuration names, or the only one in scope.
pub(super) fn lab_of(
    scopes: &HashMap<FileId, Scope>,
    file: FileId,
    recipe: Option<&Recipe>,
    configuration: &Configuration,
) -> Option<Definition> {
    let scope = scopes.get(&file)?;
    let named = |scope: &Scope, key: &NameKey, text: &str| match scope.find(Namespace::Lab, key, text) {
        Lookup::One(definition) => Some(definition.clone()),
        _ => None,
    };
    let (mut home, mut taken, mut passed) = (scope, recipe, HashSet::new());
    while let Some(recipe) = taken {
        if let Some(reference) = &recipe.lab {
            return named(home, &reference.key, &reference.text);
        }
        let like = recipe.like.as_ref();
        let base = like.map(|like| home.find(Namespace::Ingredient, &like.key, &like.text));
        let Some(Lookup::One(base)) = base else { break };
        home = scopes.get(&base.key.file)?;
        taken = base.block.recipe().filter(|_| passed.insert(&base.key));
    }
    if let Some(name) = &configuration.lab {
        return named(scope, &NameKey::new(name), name);
    }
    let mut labs = scope.own.all().filter(|(namespace, ..)| *namespace == Namespace::Lab).flat_map(|(.., found)| found);
    match (labs.next(), labs.next()) {
        (Some(only), None) => Some(only.clone()),
        _ => None,
    }
}

/// A name that a block's evaluation looks up, and the file in whose scope it does.
struct LookedUp<'a> {
    reference: &'a Reference,
    home: FileId,
    /// Where the block itself leads to it: its own line, or the `like` line that takes it over.
    at: Anchor,
}

/// Every name that a block's evaluation looks up: those of its own lines, and of the lines that `like` takes over.
fn looked_up<'a>(snapshot: &'a Snapshot, file: FileId, block: &'a Block) -> Vec<LookedUp<'a>> {
    let Some(recipe) = block.recipe() else {
        let Body::Substance(substance) = &block.body else { return Vec::new() };
        return substance.gives.iter().map(|(_, reference)| LookedUp { reference, home: file, at: reference.at }).collect();
    };
    let mut all: Vec<LookedUp> =
        recipe.references().into_iter().map(|reference| LookedUp { reference, home: file, at: reference.at }).collect();
    let (mut home, mut like, mut passed) = (file, recipe.like.as_ref(), HashSet::new());
    while let Some(reference) = like {
        let Some(Lookup::One(base)) = snapshot.scopes.get(&home).map(|scope| scope.find(Namespace::Ingredient, &reference.key, &reference.text))
        else {
            break;
        };
        let Some(taken) = base.block.recipe().filter(|_| passed.insert(&base.key)) else { break };
        home = base.key.file;
        let at = recipe.like.as_ref().map_or(Anchor::default(), |like| like.at);
        all.extend(taken.references().into_iter().map(|reference| LookedUp { reference, home, at }));
        like = taken.like.as_ref();
    }
    all
}

/// One block to be worked out.
struct Node {
    file: FileId,
    block: usize,
    meanings: Vec<Vec<Definition>>,
    /// Stocks that a strength before a name may mean.
    implied: Vec<Definition>,
    needs: Vec<usize>,
    /// The references that lead to each needed node, for the cycle's places.
    leads: Vec<(usize, Anchor, String)>,
    is_open: bool,
}

fn evaluate_all(snapshot: &mut Snapshot, last: Option<&Snapshot>, progress: &Progress) {
    let mut nodes = nodes(snapshot);
    progress.expect(nodes.len());
    link_nodes(snapshot, &mut nodes);
    for node in &nodes {
        let user = (node.file, node.block);
        for definition in node.meanings.iter().flatten() {
            let users = snapshot.users.entry(definition.key.clone()).or_default();
            if users.last() != Some(&user) {
                users.push(user);
            }
        }
    }
    let needs: Vec<Vec<usize>> = nodes.iter().map(|node| node.needs.clone()).collect();
    let order = order::order(&needs);
    let in_cycle: HashSet<usize> = order.cycles.iter().flatten().copied().collect();
    for cycle in &order.cycles {
        for member in cycle {
            if let Some(checked) = check_cycle(snapshot, &nodes, cycle, *member) {
                snapshot.checked.insert(checked.0, checked.1);
            }
        }
    }
    for wave in &order.waves {
        let work = |index: &usize| -> Option<((FileId, usize), Inputs, Arc<Checked>)> {
            let node = nodes.get(*index)?;
            let checked = check(snapshot, &nodes, node, last);
            progress.one_done();
            checked
        };
        let members: Vec<&usize> = wave.iter().filter(|index| !in_cycle.contains(index)).collect();
        // Small waves are quicker done than shared out.
        let done: Vec<_> = if members.len() < 8 {
            members.into_iter().filter_map(work).collect()
        } else {
            members.into_par_iter().filter_map(work).collect()
        };
        for (key, inputs, checked) in done {
            snapshot.inputs.insert(key, inputs);
            snapshot.checked.insert(key, checked);
        }
    }
}

fn nodes(snapshot: &Snapshot) -> Vec<Node> {
    let mut nodes = Vec::new();
    for file in snapshot.files.values() {
        for (index, block) in file.model.blocks.iter().enumerate() {
            let mut node =
                Node { file: file.id, block: index, meanings: Vec::new(), implied: Vec::new(), needs: Vec::new(), leads: Vec::new(), is_open: false };
            for LookedUp { reference, home, .. } in looked_up(snapshot, file.id, block) {
                let scope = snapshot.scopes.get(&home);
                let meaning: Vec<Definition> = match scope.map(|scope| scope.find(Namespace::Ingredient, &reference.key, &reference.text)) {
                    Some(Lookup::One(definition)) => vec![definition.clone()],
                    Some(Lookup::Several(definitions)) => definitions.into_iter().cloned().collect(),
                    Some(Lookup::Nothing) | None => Vec::new(),
                };
                node.is_open |= meaning.is_empty();
                node.meanings.push(meaning);
                // A strength before a name may mean a stock that is just that.
                if reference.strength.is_some()
                    && let Some(scope) = scope
                {
                    let stocks = scope.own.all().filter(|(namespace, ..)| *namespace == Namespace::Ingredient);
                    let mut stocks: Vec<Definition> = stocks
                        .flat_map(|(.., definitions)| definitions)
                        .filter(|definition| !Arc::ptr_eq(&definition.block, block))
                        .filter(|definition| evaluate::is_plain_stock_of(&definition.block, &reference.key))
                        .cloned()
                        .collect();
                    stocks.sort_by(|one, other| one.key.cmp(&other.key));
                    node.implied.extend(stocks);
                }
            }
            // Findings on definitions look at the names around them.
            node.is_open |= !matches!(block.body, Body::Solution(_) | Body::Bottle(_));
            nodes.push(node);
        }
    }
    nodes
}

/// Connects each node with the nodes of the solutions and bottles that it names.
fn link_nodes(snapshot: &Snapshot, nodes: &mut [Node]) {
    let mut by_key: HashMap<(FileId, NameKey), usize> = HashMap::new();
    for (index, node) in nodes.iter().enumerate() {
        let block = snapshot.files.get(&node.file).and_then(|file| file.model.blocks.get(node.block));
        if let Some(block) = block
            && matches!(block.kind(), Some(BlockKind::Solution | BlockKind::Bottle))
            && let Some(name) = &block.name
        {
            by_key.entry((node.file, name.key.clone())).or_insert(index);
        }
    }
    for node in nodes.iter_mut() {
        let block = snapshot.files.get(&node.file).and_then(|file| file.model.blocks.get(node.block));
        let Some(block) = block else { continue };
        let own_kind = block.kind();
        for definition in &node.implied {
            if let Some(needed) = by_key.get(&(definition.key.file, definition.key.name.clone()))
                && !node.needs.contains(needed)
            {
                node.needs.push(*needed);
            }
        }
        for (LookedUp { reference, at, .. }, meaning) in looked_up(snapshot, node.file, block).into_iter().zip(&node.meanings) {
            for definition in meaning {
                // A bottle that bears its substance's name holds the substance, not itself.
                if own_kind == Some(BlockKind::Bottle) && definition.block.kind() == Some(BlockKind::Bottle) {
                    continue;
                }
                if let Some(needed) = by_key.get(&(definition.key.file, definition.key.name.clone()))
                    && matches!(definition.block.kind(), Some(BlockKind::Solution | BlockKind::Bottle))
                {
                    if !node.needs.contains(needed) {
                        node.needs.push(*needed);
                    }
                    node.leads.push((*needed, at, reference.text.clone()));
                }
            }
        }
    }
}

fn block_of<'a>(snapshot: &'a Snapshot, node: &Node) -> Option<(&'a Arc<FileState>, &'a Arc<Block>)> {
    let file = snapshot.files.get(&node.file)?;
    Some((file, file.model.blocks.get(node.block)?))
}

/// Works out one block, or takes over what is known of it.
fn check(
    snapshot: &Snapshot,
    nodes: &[Node],
    node: &Node,
    last: Option<&Snapshot>,
) -> Option<((FileId, usize), Inputs, Arc<Checked>)> {
    let (file, block) = block_of(snapshot, node)?;
    let root = snapshot.roots.get(&file.root)?;
    let scope = snapshot.scopes.get(&node.file)?;
    let lab = lab_of(&snapshot.scopes, node.file, block.recipe(), &root.configuration);
    let stocks: Vec<Arc<Evaluation>> = node
        .needs
        .iter()
        .filter_map(|needed| nodes.get(*needed))
        .filter_map(|needed| snapshot.checked.get(&(needed.file, needed.block)))
        .map(|checked| checked.evaluation.clone())
        .collect();
    let inputs = Inputs {
        block: block.clone(),
        meanings: node.meanings.clone(),
        stocks,
        constituents: root.constituents.clone(),
        lab: lab.as_ref().map(|lab| lab.block.clone()),
        configuration: root.configuration.clone(),
        is_open: node.is_open,
    };
    let key = (node.file, node.block);
    if let Some(last) = last
        && let Some(old) = find_old(last, key, &inputs)
    {
        return Some((key, inputs, old));
    }
    let lab_body = lab.as_ref().and_then(|lab| match &lab.block.body {
        Body::Lab(lab) => Some(lab),
        _ => None,
    });
    let find = |key: &DefinitionKey| snapshot.evaluation(key).cloned();
    let context = Context {
        constituents: &root.constituents,
        scope,
        scopes: &snapshot.scopes,
        stocks: &find,
        lab: lab_body,
        settings: &root.configuration.settings,
    };
    let evaluation = Arc::new(evaluate::evaluate(block, &context));
    let findings = advice::findings(&advice::Case { file: node.file, block, evaluation: &evaluation, context: &context });
    Some((key, inputs, Arc::new(Checked { evaluation, findings: Arc::new(findings) })))
}

/// What the last snapshot knew of the very same inputs: at the same place, or where the block stood before.
fn find_old(last: &Snapshot, key: (FileId, usize), inputs: &Inputs) -> Option<Arc<Checked>> {
    let at = |key: (FileId, usize)| {
        let old = last.inputs.get(&key)?;
        if old.same_as(inputs) { last.checked.get(&key).cloned() } else { None }
    };
    at(key).or_else(|| {
        let file = last.files.get(&key.0)?;
        let moved = file.model.blocks.iter().position(|block| Arc::ptr_eq(block, &inputs.block))?;
        at((key.0, moved))
    })
}

/// A member of a cycle has no values, and one finding at the line that leads round.
fn check_cycle(snapshot: &Snapshot, nodes: &[Node], cycle: &[usize], member: usize) -> Option<((FileId, usize), Arc<Checked>)> {
    let node = nodes.get(member)?;
    let (_, block) = block_of(snapshot, node)?;
    let name_of = |index: &usize| {
        nodes
            .get(*index)
            .and_then(|node| block_of(snapshot, node))
            .and_then(|(_, block)| block.name.as_ref())
            .map_or(String::new(), |name| name.text.clone())
    };
    let mut findings: Vec<Finding> = block.findings.clone();
    let path = cycle_path(nodes, cycle, member);
    let leads_round = |needed: usize| path.get(1) == Some(&needed) || path.len() == 1 && needed == member;
    if let Some((_, at, text)) = node.leads.iter().find(|(needed, ..)| leads_round(*needed)) {
        let names: Vec<String> = path.iter().chain(std::iter::once(&member)).map(name_of).collect();
        let mut finding = Finding::new(
            Code::Cycle,
            *at,
            format!("{text} is made from this very solution: {}.", names.join(" ← ")),
        )
        .help("Break the circle: one of these solutions must be made from something else.");
        for other in path.iter().filter(|other| **other != member) {
            if let Some((node, name)) = nodes.get(*other).zip(nodes.get(*other).and_then(|node| block_of(snapshot, node)).and_then(|(_, block)| block.name.clone())) {
                let place = Place::Block { file: node.file, key: name.key.as_str().to_string(), anchor: Anchor::new(0, name.span) };
                finding = finding.related_at(place, format!("{} is in the circle", name.text));
            }
        }
        findings.push(finding);
    }
    let name = name_of(&member);
    let members = vec![evaluate::Member { name, outcome: None }];
    let evaluation = Evaluation { members, ..Evaluation::default() };
    let checked = Checked { evaluation: Arc::new(evaluation), findings: Arc::new(findings) };
    Some(((node.file, node.block), Arc::new(checked)))
}

/// The shortest way from a member of a cycle back to itself, the member first.
fn cycle_path(nodes: &[Node], cycle: &[usize], member: usize) -> Vec<usize> {
    let mut came_from: HashMap<usize, usize> = HashMap::new();
    let mut queue = std::collections::VecDeque::from([member]);
    while let Some(at) = queue.pop_front() {
        for needed in nodes.get(at).into_iter().flat_map(|node| &node.needs).filter(|needed| cycle.contains(needed)) {
            if *needed == member {
                let mut path = vec![at];
                while let Some(before) = path.last().filter(|last| **last != member).and_then(|last| came_from.get(last)) {
                    path.push(*before);
                }
                path.reverse();
                return path;
            }
            if !came_from.contains_key(needed) {
                came_from.insert(*needed, at);
                queue.push_back(*needed);
            }
        }
    }
    vec![member]
}

/// The findings of a block, with those that only its users can tell, less those that are accepted.
fn block_findings(file: &FileState, index: usize, checked: &Checked, snapshot: &Snapshot) -> Vec<Finding> {
    let mut findings = checked.findings.as_ref().clone();
    let Some(block) = file.model.blocks.get(index).filter(|block| block.recipe().is_some()) else { return findings };
    let key = block.name.as_ref().map(|name| DefinitionKey {
        file: file.id,
        namespace: Namespace::Ingredient,
        name: name.key.clone(),
    });
    let users = key.as_ref().map_or(&[][..], |key| snapshot.users_of(key));
    snapshot
        .with_context(file.id, index, |context| {
            let case = advice::Case { file: file.id, block, evaluation: &checked.evaluation, context };
            let users: Vec<advice::User> = users
                .iter()
                .filter_map(|(file, index)| {
                    let block = snapshot.files.get(file)?.model.blocks.get(*index)?;
                    let evaluation = &snapshot.checked(*file, *index)?.evaluation;
                    Some(advice::User { file: *file, block, evaluation })
                })
                .collect();
            findings.extend(advice::findings_by_use(&case, &users));
            advice::not_accepted(&case, findings.clone())
        })
        .unwrap_or(findings)
}

/// The findings of a file in the order of their places, at the levels that the configuration gives them.
fn file_findings(file: &FileState, snapshot: &Snapshot, links: &HashMap<FileId, Vec<Link>>) -> Vec<Located> {
    let Some(root) = snapshot.roots.get(&file.root) else { return Vec::new() };
    let mut located = Vec::new();
    let mut push = |block: usize, finding: Finding| {
        if let Some(level) = root.configuration.level(finding.code, finding.level) {
            let span = file.absolute(block, finding.at);
            located.push(Located { span, block, finding: finding.at_level(level) });
        }
    };
    if let Origin::Unreadable(problem) = &file.origin {
        let message = format!("This file is not read: {problem}.");
        push(0, Finding::new(Code::FileNotReadable, Anchor::default(), message).help("Save it as UTF-8 text."));
    }
    for (index, block) in file.model.blocks.iter().enumerate() {
        match snapshot.checked(file.id, index) {
            Some(checked) => block_findings(file, index, checked, snapshot).into_iter().for_each(|finding| push(index, finding)),
            None => block.findings.iter().for_each(|finding| push(index, finding.clone())),
        }
        if let Some(name) = &block.name {
            for (key, finding) in root.constituents.findings.iter().filter(|(key, _)| key.file == file.id && key.name == name.key) {
                if block.kind().is_some_and(|kind| namespace(kind) == key.namespace) {
                    push(index, finding.clone());
                }
            }
        }
    }
    for (line, link) in file.model.uses.iter().zip(links.get(&file.id).into_iter().flatten()) {
        let at = Anchor::new(line.path_at.line, line.path_at.span);
        match link {
            Link::To(_) => {}
            Link::Missing => push(
                line.block,
                Finding::new(Code::FileNotFound, at, format!("There is no file {} beside this one.", line.path))
                    .help("Correct the path; it is read from this file's own folder."),
            ),
            Link::Refused(help) => push(
                line.block,
                Finding::new(Code::PathOutsideRoot, at, format!("The path {} is not read.", line.path)).help(help.clone()),
            ),
            Link::OtherCase(_, name) => {
                let folder = line.path.rsplit_once('/').map_or(String::new(), |(folder, _)| format!("{folder}/"));
                push(
                    line.block,
                    Finding::new(Code::PathSpelling, at, format!("The file on disk is called {name}, in other letter case."))
                        .help("Write it as on disk: the next machine tells them apart.")
                        .fix(crate::finding::Fix::replace(format!("Write {folder}{name}"), at, format!("\"{folder}{name}\""))),
                );
            }
        }
    }
    located.sort_by(|one, other| {
        (one.span, one.finding.code, &one.finding.message).cmp(&(other.span, other.finding.code, &other.finding.message))
    });
    located.dedup_by(|one, other| one.span == other.span && one.finding.code == other.finding.code && one.finding.message == other.finding.message);
    located
}
